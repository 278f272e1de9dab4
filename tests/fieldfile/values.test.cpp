#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

TEST_CASE("text in a number") {
  CHECK(findings_of("z.csv",
                    "station,valid_from,gauge_zero_m\n"
                    "TAR-1,2010-01-01,twelve\n"
                    "TAR-1,2011-01-01,12.5 m\n") ==
        R"(z.csv:2:18: gauge_zero_m is not a number: "twelve"
    TAR-1,2010-01-01,twelve
                     ^~~~~~
  expected: a decimal number with a point, for example 12.5
  to do: write the number alone, without unit or words
z.csv:3:18: gauge_zero_m is not a number: "12.5 m"
    TAR-1,2011-01-01,12.5 m
                     ^~~~~~
  expected: a decimal number with a point, for example 12.5
  to do: write the number alone, without unit or words
2 faults found
)");
}

TEST_CASE("NaN and infinity") {
  CHECK(findings_of("g.csv",
                    "station,gauging,start,stage_m,discharge_m3s\n"
                    "TAR-1,G1,2010-01-01T10:00,1.2,NaN\n"
                    "TAR-1,G2,2010-02-01T10:00,-inf,3\n"
                    "TAR-1,G3,2010-03-01T10:00,1.2,1e999\n") ==
        R"(g.csv:2:31: discharge_m3s is not a finite number: "NaN"
    TAR-1,G1,2010-01-01T10:00,1.2,NaN
                                  ^~~
  expected: a decimal number with a point, for example 12.5
  to do: write the number alone, without unit or words
g.csv:3:27: stage_m is not a finite number: "-inf"
    TAR-1,G2,2010-02-01T10:00,-inf,3
                              ^~~~
  expected: a decimal number with a point, for example 12.5
  to do: write the number alone, without unit or words
g.csv:4:31: discharge_m3s is not a finite number: "1e999"
    TAR-1,G3,2010-03-01T10:00,1.2,1e999
                                  ^~~~~
  expected: a decimal number with a point, for example 12.5
  to do: write the number alone, without unit or words
3 faults found
)");
}

TEST_CASE("a decimal comma in quotes") {
  CHECK(findings_of("z.csv",
                    "station,valid_from,gauge_zero_m\n"
                    "TAR-1,2015-01-01T00:00Z,\"12,5\"\n") ==
        R"(z.csv:2:25: gauge_zero_m is not a number: "12,5"
    TAR-1,2015-01-01T00:00Z,"12,5"
                            ^~~~~~
  expected: a decimal number with a point, for example 12.5
  to do: write 12.5
1 fault found
)");
}

TEST_CASE("a time without offset for an unknown station") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-9,2010-01-01T00:00,1.2\n"
                    "TAR-9,2010-01-01T00:15,1.2\n"
                    "TAR-9,2010-01-01T00:30,1.2\n") ==
        R"(s.csv:2:1: station "TAR-9" is not known (and on 2 more lines)
    TAR-9,2010-01-01T00:00,1.2
    ^~~~~
  expected: a station of the book, or of a station file in the same take
  to do: write TAR-1 if that is meant, or take in a station file
s.csv:2:7: time has no offset from UTC: "2010-01-01T00:00" (and on 2 more lines)
    TAR-9,2010-01-01T00:00,1.2
          ^~~~~~~~~~~~~~~~
  expected: an offset in the text, or a known station whose offset holds
  to do: write the offset behind the time, for example +01:00, or take in a station file
2 faults found
)");
}

TEST_CASE("29 February in a wrong year") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-02-29T00:00,1.2\n") ==
        R"(s.csv:2:7: time names a date that does not exist: "2019-02-29T00:00"
    TAR-1,2019-02-29T00:00,1.2
          ^~~~~~~~~~~~~~~~
  expected: a date of the calendar, years 1677 to 2261
  to do: 2019 is no leap year: write the right date
1 fault found
)");
}

TEST_CASE("hour 25") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,2019-03-01T25:00,1.2\n") ==
        R"(s.csv:2:7: time names a time of day that does not exist: "2019-03-01T25:00"
    TAR-1,2019-03-01T25:00,1.2
          ^~~~~~~~~~~~~~~~
  expected: hours 00 to 23, minutes and seconds 00 to 59
  to do: write 24:00 as 00:00 of the next day
1 fault found
)");
}

TEST_CASE("a text that is no time") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m\n"
                    "TAR-1,01.03.2019 06:15,1.2\n") ==
        R"(s.csv:2:7: time is not a time: "01.03.2019 06:15"
    TAR-1,01.03.2019 06:15,1.2
          ^~~~~~~~~~~~~~~~
  expected: a time such as 2020-01-31T06:15+01:00, or without offset in station time
1 fault found
)");
}

TEST_CASE("an unknown quality word") {
  CHECK(findings_of("s.csv",
                    "station,time,stage_m,quality\n"
                    "TAR-1,2019-03-01T00:00,1.2,godo\n"
                    "TAR-1,2019-03-01T00:15,1.2,missing\n") ==
        R"(s.csv:2:28: quality is not a known word: "godo"
    TAR-1,2019-03-01T00:00,1.2,godo
                               ^~~~
  expected: good, unchecked, estimate, suspect, poor or missing
  to do: write good if that is meant
s.csv:3:28: quality is missing, but there is a reading: 1.2
    TAR-1,2019-03-01T00:15,1.2,missing
                               ^~~~~~~
  expected: a blank stage where the reading is missing
2 faults found
)");
}

TEST_CASE("a name with a comma") {
  CHECK(findings_of("st.csv",
                    "station,name,utc_offset\n"
                    "\"TAR,1\",Millmark,Z\n") ==
        R"(st.csv:2:1: station is no usable name: "TAR,1"
    "TAR,1",Millmark,Z
    ^~~~~~~
  expected: at most 64 characters on one line, without comma and quote, not beginning with #
1 fault found
)");
}

TEST_CASE("station rows") {
  CHECK(findings_of("st.csv",
                    "station,name,utc_offset,day_start,water_year_month,latitude\n"
                    ",Millmark,+01:00,,,\n"
                    "TAR-3,,UTC+1,24:00,13,91\n"
                    "TAR-4,Lowbridge,Z,9:00,1.5,\n") ==
        R"(st.csv:2:1: station is missing
    ,Millmark,+01:00,,,
    ^
  expected: a name
st.csv:3:7: name is missing
    TAR-3,,UTC+1,24:00,13,91
          ^
  expected: the name of the station
st.csv:3:8: utc_offset is no offset: "UTC+1"
    TAR-3,,UTC+1,24:00,13,91
           ^~~~~
  expected: the fixed offset from UTC, such as +01:00, -03:30 or Z
st.csv:3:14: day_start is no time of day: "24:00"
    TAR-3,,UTC+1,24:00,13,91
                 ^~~~~
  expected: hh:mm, from 00:00 to 23:59
st.csv:3:20: water_year_month is out of range: 13
    TAR-3,,UTC+1,24:00,13,91
                       ^~
  expected: a whole number from 1 to 12
st.csv:3:23: latitude is out of range: 91
    TAR-3,,UTC+1,24:00,13,91
                          ^~
  expected: from -90 to 90 degrees, north positive
st.csv:4:19: day_start is no time of day: "9:00"
    TAR-4,Lowbridge,Z,9:00,1.5,
                      ^~~~
  expected: hh:mm, from 00:00 to 23:59
st.csv:4:24: water_year_month is no whole number: 1.5
    TAR-4,Lowbridge,Z,9:00,1.5,
                           ^~~
  expected: a whole number from 1 to 12
8 faults found
)");
}

TEST_CASE("a stage correction that ends before it begins") {
  CHECK(findings_of("c.csv",
                    "station,from,until,add_at_from_m,add_at_until_m\n"
                    "TAR-1,2010-01-02,2010-01-01,0,0.02\n") ==
        R"(c.csv:2:18: until is not after from: "2010-01-01"
    TAR-1,2010-01-02,2010-01-01,0,0.02
                     ^~~~~~~~~~
  expected: a time later than from
1 fault found
)");
}
