#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("negative flow") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m,discharge_m3s\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2,-3.2\n") ==
        R"(g.csv:2:31: discharge_m3s is negative: -3.2
    TAR-1,G1,2010-01-01T10:00,1.2,-3.2
                                  ^~~~
  expected: 0 or more, at most 1 million m3/s
1 fault found
)");
}

TEST_CASE("a repeated gauging id") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m,discharge_m3s\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2,3.2\n"
                    "TAR-1,G2,2010-01-02T10:00,1.2,3.2\n"
                    "TAR-1,G1,2010-01-03T10:00,1.3,3.4\n") ==
        R"(g.csv:4:7: gauging G1 of TAR-1 is in this file twice, first in line 2
    TAR-1,G1,2010-01-03T10:00,1.3,3.4
          ^~
  expected: each record once
  to do: take one of them out, or correct its name
1 fault found
)");
}

TEST_CASE("end before start") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,end,stage_m,discharge_m3s\n"
                    "TAR-1,G1,2010-01-01T10:00,2010-01-01T09:00,1.2,3\n") ==
        R"(g.csv:2:27: end is before start: "2010-01-01T09:00"
    TAR-1,G1,2010-01-01T10:00,2010-01-01T09:00,1.2,3
                              ^~~~~~~~~~~~~~~~
  expected: a time not before start
1 fault found
)");
}

TEST_CASE("a slip in the method that counts") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m,discharge_m3s,method\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2,0,zero flow level\n"
                    "TAR-1,G2,2010-01-01T10:00,1.2,3,zero-flow-level\n") ==
        R"(g.csv:2:33: method is not a known word: "zero flow level"
    TAR-1,G1,2010-01-01T10:00,1.2,0,zero flow level
                                    ^~~~~~~~~~~~~~~
  expected: zero-flow-level, or any other method
  to do: write zero-flow-level if that is meant
g.csv:3:31: discharge_m3s is not zero at a zero-flow level: 3
    TAR-1,G2,2010-01-01T10:00,1.2,3,zero-flow-level
                                  ^
  expected: 0 or blank where method is zero-flow-level
2 faults found
)");
}
