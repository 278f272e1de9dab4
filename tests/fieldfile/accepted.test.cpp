// What a good file may look like: forms that are accepted, and what they become.
#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

namespace {

Instant at(const std::string& text) {
  return parse_time(text, UtcOffset{}).time;
}

ParsedFile good(const std::string& text, const ReadOptions& options = {}) {
  ParsedFile file = read_text(text, options);
  CHECK(describe(file.findings) == "0 faults found\n");
  return file;
}

}  // namespace

TEST_CASE("byte order mark, CRLF, comments on top and blank lines at the end are accepted") {
  const ParsedFile file = good(
      "\xEF\xBB\xBF# from the logger\r\n#\r\n\r\nstation,time,stage_m\r\nTAR-1,2010-01-01T00:00,1.25\r\n\r\n "
      " \r\n");
  REQUIRE(file.stage.size() == 1);
  REQUIRE(file.stage[0].readings.size() == 1);
  CHECK(file.stage[0].readings[0].time == at("2009-12-31T23:00Z"));
  CHECK(file.stage[0].readings[0].value == 125);
  CHECK(file.stage[0].readings[0].line == 5);
  CHECK(file.rows == 1);
}

TEST_CASE("a last line without an end is a line") {
  CHECK(good("station,time,stage_m\nTAR-1,2010-01-01T00:00,1.25").rows == 1);
}

TEST_CASE("quotes, doubled quotes, commas and line ends inside a field") {
  const ParsedFile file = good(
      "station,name,utc_offset,river,remark\n"
      "TAR-7, \"Mill \"\"mark\"\", old\" ,\"+02:00\",Tarrowen ,\"moved\r\nin 2011,\n\ntwice\"\n"
      "TAR-8,Lowbridge,Z,,\n");
  REQUIRE(file.stations.size() == 2);
  CHECK(file.stations[0].record.name == "Mill \"mark\", old");
  CHECK(file.stations[0].record.river == "Tarrowen");
  CHECK(file.stations[0].record.remark == "moved\nin 2011,\n\ntwice");
  CHECK(file.stations[0].record.clock.offset == UtcOffset{std::chrono::minutes(120)});
  CHECK(file.stations[1].place.line == 6);
}

TEST_CASE("a finding in a record over several lines points at its own line") {
  CHECK(findings_of("st.csv",
                    "station,name,remark,utc_offset\n"
                    "TAR-7,Mill,\"moved\nin 2011\",local\n") ==
        "st.csv:3:10: utc_offset is no offset: \"local\"\n"
        "    in 2011\",local\n"
        "             ^~~~~\n"
        "  expected: the fixed offset from UTC, such as +01:00, -03:30 or Z\n"
        "1 fault found\n");
}

TEST_CASE("a station row with everything, and one with the least") {
  const ParsedFile file = good(
      "station,name,river,utc_offset,day_start,water_year_month,latitude,longitude,remark\n"
      "TAR-7,Mill,Tarrowen,+01:00,09:00,11,51.5,-2.25,new\n"
      "TAR-8,Low,,-03:30,,,,,\n");
  Station full;
  full.id = "TAR-7";
  full.name = "Mill";
  full.river = "Tarrowen";
  full.clock = {UtcOffset{std::chrono::minutes(60)}, std::chrono::minutes(540), 11};
  full.latitude = 51.5;
  full.longitude = -2.25;
  full.remark = "new";
  CHECK(file.stations[0].record == full);
  CHECK(file.stations[1].record.clock ==
        StationClock{UtcOffset{std::chrono::minutes(-210)}, std::chrono::minutes(0), 10});
  CHECK_FALSE(file.stations[1].record.latitude.has_value());
}

TEST_CASE("a station file makes its stations known, with their offset") {
  KnownStations known;
  const std::string text = "station,name,utc_offset\nTAR-7,Mill,+02:00\nTAR-8,Low,bad\n";
  MemoryBytes bytes(text);
  const ParsedFile file = read_records(bytes, "st.csv", known);
  CHECK(file.findings.size() == 1);
  REQUIRE(known.size() == 2);
  CHECK(known["TAR-7"].offset == UtcOffset{std::chrono::minutes(120)});
  CHECK_FALSE(known["TAR-8"].offset.has_value());
  // Times of a station whose own row is faulty are checked all the same, without a finding for the lack of an
  // offset.
  const std::string zero = "station,valid_from,gauge_zero_m\nTAR-8,2010-01-01,12.5\nTAR-8,2010-02-30,12.5\n";
  MemoryBytes zero_bytes(zero);
  CHECK(read_records(zero_bytes, "z.csv", known).findings.size() == 1);
}

TEST_CASE("feet become metres exactly, column by column") {
  const ParsedFile file = good(
      "station,gauging,start,stage_ft,discharge_ft3s,area_ft2,width_m,velocity_fts,stage_uncertainty_ft\n"
      "TAR-1,G1,2010-01-01T10:00,10.25,1000,500,20,2.5,0.01\n");
  const Gauging& gauging = file.gaugings.at(0).record;
  CHECK(gauging.stage.ticks() == 312'420'000);  // 10.25 ft = 3.1242 m
  CHECK(gauging.discharge.m3s() == Approx(28.316846592).epsilon(1e-15));
  CHECK(*gauging.area_m2 == Approx(46.45152).epsilon(1e-15));
  CHECK(*gauging.width_m == 20);
  CHECK(*gauging.velocity_ms == Approx(0.762).epsilon(1e-15));
  CHECK(*gauging.stage_uncertainty_m == Approx(0.003048).epsilon(1e-15));
  const ParsedFile zero = good("station,valid_from,gauge_zero_ft\nTAR-1,2010-01-01,410.1050\n");
  CHECK(zero.gauge_zeros.at(0).record.zero.ticks() == 12'500'000'400);
}

TEST_CASE("stage keeps its digits: integers, the most decimals of the file, feet stay feet") {
  const ParsedFile file = good(
      "station,time,stage_ft,quality\n"
      "TAR-2,2010-01-01T00:00,3,good\n"
      "TAR-2,2010-01-01T00:15,-3.25,\n"
      "TAR-2,2010-01-01T00:30,,good\n"
      "TAR-1,2010-01-01T00:30Z,+3.2,suspect\n"
      "TAR-2,2010-01-01T00:45,3.1250,estimate\n");
  REQUIRE(file.stage.size() == 2);
  const store::StageSeries& two = file.stage[0];
  CHECK(two.station == "TAR-2");
  CHECK(two.unit == store::StageUnit::foot);
  CHECK(two.decimals == 4);
  REQUIRE(two.readings.size() == 4);
  CHECK(two.readings[0].value == 30'000);
  CHECK(two.readings[0].quality == Quality::good);
  CHECK(two.readings[1].value == -32'500);
  CHECK(two.readings[1].quality == Quality::unchecked);
  CHECK(two.readings[2].value == store::kMissing);
  CHECK(two.readings[2].quality == Quality::missing);
  CHECK(two.readings[3].value == 31'250);
  CHECK(two.readings[3].line == 6);
  CHECK(file.stage[1].decimals == 4);
  CHECK(file.stage[1].readings.at(0).value == 32'000);
}

TEST_CASE("a survey of two sections, parts and marks") {
  const ParsedFile file = good(
      "station,survey,surveyed_at,cross_section,part,distance_m,elevation_m,level_uncertainty_m,mark,remark\n"
      "TAR-1,S1,2010-05-01,X1,left,0,12,0.02,BM1,after the flood\n"
      "TAR-1,S1,,X1,,5,9,,,\n"
      "TAR-1,S1,2010-05-01,X1,main,5,8,0.02,,after the flood\n"
      "TAR-1,S1,,X1,,9,12,,BM2,low water\n"
      "TAR-1,S1,,X2,,30,9,,BM1,\n"
      "TAR-1,S1,,X2,,20,8,,,\n"
      "TAR-1,S1,,X2,,10,9.5,,,\n");
  REQUIRE(file.surveys.size() == 1);
  const Survey& survey = file.surveys[0].record;
  CHECK(survey.surveyed_at == at("2010-04-30T23:00Z"));
  CHECK(survey.level_uncertainty_m == 0.02);
  CHECK(survey.remark == "after the flood; low water");
  REQUIRE(survey.points.size() == 7);
  CHECK(survey.points[0] == SurveyPoint{"X1", "left", 0, 12, "BM1"});
  CHECK(survey.points[1] == SurveyPoint{"X1", "main", 5, 9, ""});
  CHECK(survey.points[6] == SurveyPoint{"X2", "main", 10, 9.5, ""});
  CHECK(file.surveys[0].point_lines == std::vector<std::int64_t>{2, 3, 4, 5, 6, 7, 8});
}

TEST_CASE("reach rows of the three flow laws") {
  const ParsedFile file = good(
      "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n,chezy_c,coefficient,meander_"
      "factor,"
      "scale_sd_pct,level_from_ft,level_to_ft,remark\n"
      "TAR-1,2010-01-01,section,X1,,critical,,,,0.95,,5,,,crest\n"
      "TAR-1,2010-01-01,channel,X1,,manning,0.0012,0.035,,,1.1,15,10,20,\n"
      "TAR-1,2010-01-01,overbank,X1,left,chezy,0.001,,25,,,,,,\n");
  REQUIRE(file.reaches.size() == 3);
  CHECK(file.reaches[0].record.law == FlowLaw::critical);
  CHECK(file.reaches[0].record.coefficient == 0.95);
  CHECK(file.reaches[1].record.meander_factor == 1.1);
  CHECK(*file.reaches[1].record.level_to_m == Approx(6.096).epsilon(1e-15));
  CHECK(file.reaches[2].record.part == "left");
  CHECK(file.reaches[2].record.chezy_c == 25);
}

TEST_CASE("zero flow, and the level of zero flow without a discharge") {
  const ParsedFile file = good(
      "station,gauging,start,end,stage_m,stage_end_m,discharge_m3s,method\n"
      "TAR-1,Z1,2010-01-01T10:00,2010-01-01T10:00,0.12,0.12,0,observed dry\n"
      "TAR-1,Z2,2010-01-02T10:00,,0.10,,,zero-flow-level\n");
  CHECK(file.gaugings.at(0).record.is_zero_flow());
  CHECK(file.gaugings.at(1).record.is_zero_flow_level());
  CHECK(file.gaugings.at(1).record.discharge.m3s() == 0);
}

TEST_CASE("a withdrawal needs no more than the key") {
  ReadOptions options;
  options.correct = true;
  const ParsedFile file = good(
      "station,gauging,start,stage_m,discharge_m3s,withdrawn\n"
      "TAR-1,G1,,,,yes\n"
      "TAR-1,G2,2010-01-02T10:00,1.2,3.4,no\n",
      options);
  CHECK(file.gaugings.at(0).withdrawn);
  CHECK_FALSE(file.gaugings.at(1).withdrawn);
}

TEST_CASE("columns may stand in any order") {
  const ParsedFile file = good("quality,stage_m,time,station\ngood,1.2,2010-01-01T00:00Z,TAR-1\n");
  CHECK(file.stage.at(0).readings.at(0).value == 12);
}
