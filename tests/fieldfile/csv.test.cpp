#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("too few fields") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2010-01-01T00:00,1.2\n"
                    "TAR-1,2010-01-01T00:15\n") ==
        R"(s.csv:3:23: 2 fields where the header has 3
    TAR-1,2010-01-01T00:15
                          ^
  expected: station,time,stage_m
  to do: add what is missing; leave a field without value blank, with its comma
1 fault found
)");
}

TEST_CASE("a decimal comma that splits a field") {
  CHECK(findings_of("z.csv",
                    "station,valid_from,gauge_zero_m\n"
                    "TAR-1,2015-01-01T00:00Z,12,5\n") ==
        R"(z.csv:2:28: 4 fields where the header has 3
    TAR-1,2015-01-01T00:00Z,12,5
                               ^
  expected: station,valid_from,gauge_zero_m
  to do: write numbers with a decimal point, and put a text that holds a comma in quotes
1 fault found
)");
}

TEST_CASE("binary content") {
  CHECK(findings_of("b.csv", std::string("\177ELF\002\000\000\000", 8)) ==
        R"(b.csv:1: is no table: it holds NUL bytes
    �ELF����
  expected: a table as CSV in UTF-8
  to do: export the table as CSV
1 fault found
)");
}

TEST_CASE("UTF-16") {
  CHECK(findings_of("u.csv", std::string("\377\376s\000t\000", 6)) ==
        R"(u.csv:1: is UTF-16 text
    ��s�t�
  expected: a table as CSV in UTF-8
  to do: save it as CSV in UTF-8
1 fault found
)");
}

TEST_CASE("bytes that are not UTF-8") {
  CHECK(findings_of("st.csv",
                    "station,name,utc_offset\n"
                    "TAR-1,M\374hlmark,Z\n") ==
        R"(st.csv:2: holds bytes that are not UTF-8
    TAR-1,M�hlmark,Z
  expected: text in UTF-8
  to do: save the file as CSV in UTF-8
1 fault found
)");
}

TEST_CASE("a quote that is never closed") {
  CHECK(findings_of("st.csv",
                    "station,name,utc_offset\n"
                    "TAR-1,\"Millmark,Z\n"
                    "TAR-2,Lowbridge,Z\n") ==
        R"(st.csv:2:7: this quote is never closed
    TAR-1,"Millmark,Z
          ^
  expected: a closing quote behind the field
1 fault found
)");
}

TEST_CASE("text behind a closing quote and quotes inside a plain field") {
  CHECK(findings_of("st.csv",
                    "station,name,utc_offset\n"
                    "TAR-1,\"Mill\"mark,Z\n"
                    "TAR-2,Low\"bridge,Z\n") ==
        R"(st.csv:2:13: text behind a closing quote
    TAR-1,"Mill"mark,Z
                ^~~~
  expected: a comma or the end of the line; a quote inside quotes is doubled
st.csv:3:7: a quote inside a field that is not in quotes: "Low"bridge"
    TAR-2,Low"bridge,Z
          ^~~~~~~~~~
  expected: the whole field in quotes, each quote in it doubled
2 faults found
)");
}

TEST_CASE("a blank line and a comment between records, a line of commas") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T00:00,1.2\n"
                    "\n"
                    "TAR-1,2019-03-01T00:15,1.2\n"
                    "# note\n"
                    ",,\n") ==
        R"(s.csv:3: blank line between records
  expected: a record on every line; blank lines only at the end
  to do: take the line out
s.csv:5: comment line below the header
    # note
  expected: comment lines only above the header
  to do: move it to the top or take it out
s.csv:6: all fields are blank
    ,,
  expected: station,time,stage_m
  to do: take the line out
3 faults found
)");
}

TEST_CASE("a carriage return inside a line") {
  CHECK(findings_of("s.csv", "station,time,stage_m\rTAR-1,2019-03-01T00:00,1.2\r") ==
        R"(s.csv:1:21: holds a carriage return inside the line
    station,time,stage_m�TAR-1,2019-03-01T00:00,1.2
                        ^
  expected: plain text, lines ending in LF or CRLF
  to do: save the file with LF or CRLF line ends
1 fault found
)");
}
