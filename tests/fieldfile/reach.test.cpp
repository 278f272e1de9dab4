#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("slope, roughness, meander factor and coefficient out of sense") {
  CHECK(findings_of("r.csv",
                    "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n,chezy_c,"
                    "coefficient,meander_factor\n"
                    "TAR-1,2010-01-01,channel,X1,,manning,1.5,0.0035,,,0.9\n"
                    "TAR-1,2010-01-01,channel,X2,,manning,0,35,,,\n"
                    "TAR-1,2010-01-01,section,X1,,critical,,,,0,\n") ==
        R"(r.csv:2:38: slope is out of range: 1.5
    TAR-1,2010-01-01,channel,X1,,manning,1.5,0.0035,,,0.9
                                         ^~~
  expected: over 0 and at most 1 (metres of fall per metre)
r.csv:2:42: roughness_n is out of range: 0.0035
    TAR-1,2010-01-01,channel,X1,,manning,1.5,0.0035,,,0.9
                                             ^~~~~~
  expected: Manning's n from 0.005 to 1
r.csv:2:51: meander_factor is out of range: 0.9
    TAR-1,2010-01-01,channel,X1,,manning,1.5,0.0035,,,0.9
                                                      ^~~
  expected: 1 (straight) or more, at most 10
r.csv:3:38: slope is out of range: 0
    TAR-1,2010-01-01,channel,X2,,manning,0,35,,,
                                         ^
  expected: over 0 and at most 1 (metres of fall per metre)
r.csv:3:40: roughness_n is out of range: 35
    TAR-1,2010-01-01,channel,X2,,manning,0,35,,,
                                           ^~
  expected: Manning's n from 0.005 to 1
r.csv:4:42: coefficient is out of range: 0
    TAR-1,2010-01-01,section,X1,,critical,,,,0,
                                             ^
  expected: from 0.1 to 3 (1 is the theory of critical flow)
6 faults found
)");
}

TEST_CASE("a reach row that lacks or contradicts its flow law") {
  CHECK(findings_of("r.csv",
                    "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n,chezy_c,"
                    "coefficient,meander_factor\n"
                    "TAR-1,2010-01-01,channel,X1,,manning,0.001,,,,\n"
                    "TAR-1,2010-01-01,channel,X2,,chezy,0.001,0.03,40,,\n"
                    "TAR-1,2010-01-01,section,X1,,critical,0.001,,,1,\n") ==
        R"(r.csv:2:44: flow law manning needs roughness_n
    TAR-1,2010-01-01,channel,X1,,manning,0.001,,,,
                                               ^
  expected: Manning's n from 0.005 to 1
r.csv:3:42: flow law chezy does not use roughness_n
    TAR-1,2010-01-01,channel,X2,,chezy,0.001,0.03,40,,
                                             ^~~~
  expected: a blank field, or the flow law that uses it
r.csv:4:39: flow law critical does not use slope
    TAR-1,2010-01-01,section,X1,,critical,0.001,,,1,
                                          ^~~~~
  expected: a blank field, or the flow law that uses it
3 faults found
)");
}

TEST_CASE("unknown control and flow law") {
  CHECK(findings_of("r.csv",
                    "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n,chezy_c,"
                    "coefficient,meander_factor\n"
                    "TAR-1,2010-01-01,chanel,X1,,maning,0.001,0.03,,,\n"
                    "TAR-1,2010-01-01,weir,X1,,strickler,0.001,0.03,,,\n") ==
        R"(r.csv:2:18: control is not a known word: "chanel"
    TAR-1,2010-01-01,chanel,X1,,maning,0.001,0.03,,,
                     ^~~~~~
  expected: section, channel or overbank
  to do: write channel if that is meant
r.csv:2:29: flow_law is not a known word: "maning"
    TAR-1,2010-01-01,chanel,X1,,maning,0.001,0.03,,,
                                ^~~~~~
  expected: manning, chezy or critical
  to do: write manning if that is meant
r.csv:3:18: control is not a known word: "weir"
    TAR-1,2010-01-01,weir,X1,,strickler,0.001,0.03,,,
                     ^~~~
  expected: section, channel or overbank
r.csv:3:27: flow_law is not a known word: "strickler"
    TAR-1,2010-01-01,weir,X1,,strickler,0.001,0.03,,,
                              ^~~~~~~~~
  expected: manning, chezy or critical
4 faults found
)");
}

TEST_CASE("a range upside down") {
  CHECK(findings_of(
            "r.csv",
            "station,valid_from,control,cross_section,flow_law,slope,roughness_n,level_from_m,level_to_m\n"
            "TAR-1,2010-01-01,channel,X1,manning,0.001,0.03,12,11.5\n") ==
        R"(r.csv:2:51: level_to_m is not above level_from_m: 11.5
    TAR-1,2010-01-01,channel,X1,manning,0.001,0.03,12,11.5
                                                      ^~~~
  expected: a level above the lower end of the range
1 fault found
)");
}
