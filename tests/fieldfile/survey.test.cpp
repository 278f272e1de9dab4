#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("a survey with two points") {
  CHECK(findings_of("p.csv",
                    "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
                    "TAR-1,S1,2010-05-01,X1,0,10\n"
                    "TAR-1,S1,,X1,5,8\n") ==
        R"(p.csv:2:21: cross-section X1 of survey S1 has only 2 points
    TAR-1,S1,2010-05-01,X1,0,10
                        ^~
  expected: at least 3 points
1 fault found
)");
}

TEST_CASE("a section that turns back") {
  CHECK(findings_of("p.csv",
                    "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
                    "TAR-1,S1,2010-05-01,X1,0,10\n"
                    "TAR-1,S1,,X1,5,8\n"
                    "TAR-1,S1,,X1,4,8.5\n"
                    "TAR-1,S1,,X1,10,10\n") ==
        R"(p.csv:4:14: the cross-section turns back: distance_m 4
    TAR-1,S1,,X1,4,8.5
                 ^
  expected: distances that run one way along the section
  to do: put the points in order, or mend the distance
1 fault found
)");
}

TEST_CASE("a missing elevation") {
  CHECK(findings_of("p.csv",
                    "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
                    "TAR-1,S1,2010-05-01,X1,0,10\n"
                    "TAR-1,S1,,X1,5,\n"
                    "TAR-1,S1,,X1,10,10\n") ==
        R"(p.csv:3:16: elevation_m is missing
    TAR-1,S1,,X1,5,
                   ^
  expected: a number, from -1000 to 10000 m
1 fault found
)");
}

TEST_CASE("a section without width") {
  CHECK(findings_of("p.csv",
                    "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
                    "TAR-1,S1,2010-05-01,X1,3,10\n"
                    "TAR-1,S1,,X1,3,9\n"
                    "TAR-1,S1,,X1,3,8\n") ==
        R"(p.csv:2:21: cross-section X1 of survey S1 has no width
    TAR-1,S1,2010-05-01,X1,3,10
                        ^~
  expected: points at different distances
1 fault found
)");
}

TEST_CASE("a section that comes back") {
  CHECK(findings_of("p.csv",
                    "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
                    "TAR-1,S1,2010-05-01,X1,0,10\n"
                    "TAR-1,S1,,X2,0,10\n"
                    "TAR-1,S1,,X1,5,9\n"
                    "TAR-1,S1,,X1,7,9\n"
                    "TAR-1,S1,,X2,5,9\n"
                    "TAR-1,S1,,X2,7,9\n") ==
        R"(p.csv:4:11: cross-section X1 comes back after X2
    TAR-1,S1,,X1,5,9
              ^~
  expected: all points of a cross-section together
p.csv:6:11: cross-section X2 comes back after X1
    TAR-1,S1,,X2,5,9
              ^~
  expected: all points of a cross-section together
2 faults found
)");
}

TEST_CASE("a survey with two times") {
  CHECK(findings_of("p.csv",
                    "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
                    "TAR-1,S1,2010-05-01,X1,0,10\n"
                    "TAR-1,S1,2010-05-02,X1,5,8\n"
                    "TAR-1,S1,,X1,10,10\n") ==
        R"(p.csv:3:10: survey S1 has another surveyed_at above
    TAR-1,S1,2010-05-02,X1,5,8
             ^~~~~~~~~~
  expected: the same time in all rows of a survey
1 fault found
)");
}
