#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("a missing column") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2\n") ==
        R"(g.csv:1: the header fits no kind of file; the nearest, gauging, lacks discharge_m3s
    station,gauging,start,stage_m
  expected: gauging: station, gauging, start, [end], stage_m, discharge_m3s, [uncertainty_pct], [stage_uncertainty_m], [stage_end_m], [method], [area_m2], [width_m], [velocity_ms], [quality], [remark]
  to do: add the column
1 fault found
)");
}

TEST_CASE("an unknown unit") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_cm\n"
                    "TAR-1,2010-01-01,120\n") ==
        R"(s.csv:1:14: stage_cm: unit not known
    station,time,stage_cm
                 ^~~~~~~~
  expected: a name that ends in one of _m, _ft, _m3s, _ft3s, _m2, _ft2, _ms, _fts
  to do: write stage_m or stage_ft
1 fault found
)");
}

TEST_CASE("a column without unit") {
  CHECK(findings_of("s.csv",
                    "station,time,stage\n"
                    "TAR-1,2010-01-01,1.2\n") ==
        R"(s.csv:1:14: stage: no unit
    station,time,stage
                 ^~~~~
  expected: the unit at the end of the name
  to do: write stage_m or stage_ft
1 fault found
)");
}

TEST_CASE("a unit of another measure") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m,discharge_m\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2,3\n") ==
        R"(g.csv:1:31: discharge_m: m is no unit of discharge
    station,gauging,start,stage_m,discharge_m
                                  ^~~~~~~~~~~
  expected: discharge_m3s or discharge_ft3s
  to do: write discharge_m3s or discharge_ft3s
1 fault found
)");
}

TEST_CASE("a misspelt column") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m,dischrage_m3s\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2,3\n") ==
        R"(g.csv:1:31: "dischrage_m3s" is no column of a gauging file
    station,gauging,start,stage_m,dischrage_m3s
                                  ^~~~~~~~~~~~~
  expected: station, gauging, start, [end], stage_m, discharge_m3s, [uncertainty_pct], [stage_uncertainty_m], [stage_end_m], [method], [area_m2], [width_m], [velocity_ms], [quality], [remark]
  to do: write discharge_m3s if that is meant
1 fault found
)");
}

TEST_CASE("a column too many") {
  CHECK(findings_of("z.csv",
                    "station,valid_from,gauge_zero_m,observer\n"
                    "TAR-1,2010-01-01,12.5,A\n") ==
        R"(z.csv:1:33: "observer" is no column of a gauge zero file
    station,valid_from,gauge_zero_m,observer
                                    ^~~~~~~~
  expected: station, valid_from, gauge_zero_m, [remark]
  to do: take the column out, or give it its right name
1 fault found
)");
}

TEST_CASE("a column twice") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m,stage_ft\n"
                    "TAR-1,2010-01-01,1.2,4\n") ==
        R"(s.csv:1:22: stage_ft gives stage a second time, after stage_m
    station,time,stage_m,stage_ft
                         ^~~~~~~~
  expected: each column once, in one unit
  to do: take one of them out
1 fault found
)");
}

TEST_CASE("a column without name") {
  CHECK(findings_of("z.csv",
                    "station,valid_from,gauge_zero_m,\n"
                    "TAR-1,2010-01-01,12.5,\n") ==
        R"(z.csv:1:33: column 4 has no name
    station,valid_from,gauge_zero_m,
                                    ^
  expected: station, valid_from, gauge_zero_m, [remark]
  to do: take the column out, or give it its right name
1 fault found
)");
}

TEST_CASE("withdrawn outside a correction") {
  CHECK(findings_of("z.csv",
                    "station,valid_from,gauge_zero_m,withdrawn\n"
                    "TAR-1,2010-01-01,12.5,yes\n") ==
        R"(z.csv:1:33: withdrawn is a column of corrections only
    station,valid_from,gauge_zero_m,withdrawn
                                    ^~~~~~~~~
  expected: a file without it, or a correction
  to do: take the file in with --correct --reason TEXT
1 fault found
)");
}

TEST_CASE("semicolons") {
  CHECK(findings_of("s.csv",
                    "station;time;stage_m\n"
                    "TAR-1;2010-01-01;1,2\n") ==
        R"(s.csv:1: the fields are parted by semicolons
    station;time;stage_m
  expected: fields parted by commas (CSV, RFC 4180)
  to do: export the table as CSV with commas, numbers with a decimal point
1 fault found
)");
}

TEST_CASE("the header twice") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T00:00,1.2\n"
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T00:15,1.2\n") ==
        R"(s.csv:3: the header line stands here again
    station,time,stage_m
  expected: one header at the top
  to do: take the line out
1 fault found
)");
}

TEST_CASE("an empty file") {
  CHECK(findings_of("e.csv", "") ==
        R"(e.csv: the file is empty
  expected: a header line and records below it
1 fault found
)");
}

TEST_CASE("comments only") {
  CHECK(findings_of("e.csv",
                    "# nothing\n"
                    "# here\n") ==
        R"(e.csv: the file holds comments or blank lines only
  expected: a header line and records below it
1 fault found
)");
}

TEST_CASE("a header only") {
  CHECK(findings_of("s.csv", "station,time,stage_m\n") ==
        R"(s.csv:1: there is nothing below the header
    station,time,stage_m
  expected: records below the header line
1 fault found
)");
}

TEST_CASE("text that is no table") {
  CHECK(findings_of("t.txt",
                    "Dear colleagues,\n"
                    "the gauge was moved.\n") ==
        R"(t.txt:1: is text that is no table of field data: its first line names no known column
    Dear colleagues,
  expected: a header line of one of these kinds: station, gauge zero, reach, survey, gauging, stage correction, stage
1 fault found
)");
}
