#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("a time twice") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T00:00,1.2\n"
                    "TAR-1,2019-03-01T00:00,1.3\n") ==
        R"(s.csv:3:7: time "2019-03-01T00:00" of station TAR-1 is in line 2 already
    TAR-1,2019-03-01T00:00,1.3
          ^~~~~~~~~~~~~~~~
  expected: each time once
  to do: take one of the two lines out
1 fault found
)");
}

TEST_CASE("time going back") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T00:15,1.2\n"
                    "TAR-2,2019-02-01T00:00,1.3\n"
                    "TAR-1,2019-03-01T00:00,1.3\n") ==
        R"(s.csv:4:7: time goes back: "2019-03-01T00:00" is before line 2, 2019-03-01T00:15:00+01:00
    TAR-1,2019-03-01T00:00,1.3
          ^~~~~~~~~~~~~~~~
  expected: times that rise from line to line, for each station
  to do: put the lines in order of time
1 fault found
)");
}

TEST_CASE("decimals, range and exponents of stage") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T00:00,1.123456789\n"
                    "TAR-1,2019-03-01T00:15,-9999\n"
                    "TAR-1,2019-03-01T00:30,1.2e1\n"
                    "TAR-1,2019-03-01T00:45,\"1,2\"\n"
                    "TAR-1,2019-03-01T01:00,NaN\n"
                    "TAR-1,2019-03-01T01:15,n/a\n") ==
        R"(s.csv:2:24: stage_m has 9 decimals: 1.123456789
    TAR-1,2019-03-01T00:00,1.123456789
                           ^~~~~~~~~~~
  expected: at most 8 decimals
s.csv:3:24: stage_m is out of range: -9999
    TAR-1,2019-03-01T00:15,-9999
                           ^~~~~
  expected: from -1000 to 10000 m
  to do: leave the field blank where the reading is missing
s.csv:4:24: stage_m is not a number: "1.2e1"
    TAR-1,2019-03-01T00:30,1.2e1
                           ^~~~~
  expected: a plain decimal number with a point, or blank where the reading is missing
  to do: write the digits out, without exponent
s.csv:5:24: stage_m is not a number: "1,2"
    TAR-1,2019-03-01T00:45,"1,2"
                           ^~~~~
  expected: a plain decimal number with a point, or blank where the reading is missing
  to do: write 1.2
s.csv:6:24: stage_m is not a finite number: "NaN"
    TAR-1,2019-03-01T01:00,NaN
                           ^~~
  expected: a plain decimal number with a point, or blank where the reading is missing
  to do: write the number alone, without unit or words, or leave the field blank where there is none
s.csv:7:24: stage_m is not a number: "n/a"
    TAR-1,2019-03-01T01:15,n/a
                           ^~~
  expected: a plain decimal number with a point, or blank where the reading is missing
  to do: write the number alone, without unit or words, or leave the field blank where there is none
6 faults found
)");
}
