// Properties: what was written reads back equal; plain and general reading of stage agree.
#include <fmt/format.h>

#include <random>

#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

namespace {

using Random = std::mt19937_64;

double uniform(Random& random, double low, double high) {
  return std::uniform_real_distribution<double>(low, high)(random);
}
bool chance(Random& random, double share) {
  return uniform(random, 0, 1) < share;
}

/// A field as a careless program may write it: quoted or not, quotes doubled, blanks around.
std::string field(Random& random, const std::string& text) {
  const bool must = text.find_first_of(",\"\n") != std::string::npos;
  if (!must && chance(random, 0.7)) return chance(random, 0.2) ? " " + text + "\t" : text;
  std::string quoted = "\"";
  for (const char c : text) quoted += c == '"' ? std::string("\"\"") : std::string(1, c);
  return quoted + "\"";
}

std::string line(Random& random, const std::vector<std::string>& fields) {
  std::string out;
  for (std::size_t i = 0; i < fields.size(); ++i) out += (i > 0 ? "," : "") + field(random, fields[i]);
  return out + (chance(random, 0.3) ? "\r\n" : "\n");
}

std::string exact(double value) {
  return fmt::format("{:.17g}", value);
}
std::string exact(const std::optional<double>& value) {
  return value ? exact(*value) : "";
}
template <class Tag>
std::string exact(Height<Tag> height) {
  return fmt::format("{:.8f}", height.metres());
}

std::string some_remark(Random& random) {
  const std::vector<std::string> remarks{"",           "plain",        "with, comma", "with \"quotes\"",
                                         "two\nlines", "Mühle am Wehr"};
  return remarks[random() % remarks.size()];
}

Instant some_time(Random& random) {
  return from_ms(static_cast<std::int64_t>(uniform(random, 0, 1.6e9)) * 1000);
}
std::string text_of(Instant time) {
  return format_time(time, {});
}

Gauging some_gauging(Random& random, int number) {
  Gauging g;
  g.station = chance(random, 0.5) ? "TAR-1" : "TAR-2";
  g.id = fmt::format("G{}", number);
  g.start = some_time(random);
  if (chance(random, 0.5)) g.end = g.start + std::chrono::hours(1);
  g.stage = Stage::from_ticks(static_cast<std::int64_t>(uniform(random, -1e8, 1e9)));
  if (chance(random, 0.3))
    g.stage_end = Stage::from_ticks(static_cast<std::int64_t>(uniform(random, -1e8, 1e9)));
  g.discharge = Discharge::from_m3s(std::exp(uniform(random, -10, 12)));
  if (chance(random, 0.5)) g.uncertainty_pct = uniform(random, 1, 30);
  if (chance(random, 0.5)) g.stage_uncertainty_m = uniform(random, 0.001, 0.1);
  g.method = chance(random, 0.5) ? "current meter" : "";
  if (chance(random, 0.5)) g.area_m2 = uniform(random, 0, 1000);
  if (chance(random, 0.5)) g.width_m = uniform(random, 0, 100);
  if (chance(random, 0.5)) g.velocity_ms = uniform(random, -1, 5);
  g.quality = static_cast<Quality>(random() % 6);
  g.remark = some_remark(random);
  return g;
}

}  // namespace

TEST_CASE("random gaugings written to a file read back equal") {
  Random random(1);
  std::string text =
      "station,gauging,start,end,stage_m,stage_end_m,discharge_m3s,uncertainty_pct,stage_uncertainty_m,"
      "method,"
      "area_m2,width_m,velocity_ms,quality,remark\n";
  std::vector<Gauging> written;
  for (int i = 0; i < 500; ++i) {
    const Gauging g = some_gauging(random, i);
    written.push_back(g);
    text += line(random, {g.station, g.id, text_of(g.start), g.end ? text_of(*g.end) : "", exact(g.stage),
                          g.stage_end ? exact(*g.stage_end) : "", exact(g.discharge.m3s()),
                          exact(g.uncertainty_pct), exact(g.stage_uncertainty_m), g.method, exact(g.area_m2),
                          exact(g.width_m), exact(g.velocity_ms), std::string(word(g.quality)), g.remark});
  }
  const ParsedFile file = read_text(text);
  REQUIRE(describe(file.findings) == "0 faults found\n");
  REQUIRE(file.gaugings.size() == written.size());
  for (std::size_t i = 0; i < written.size(); ++i) CHECK(file.gaugings[i].record == written[i]);
}

TEST_CASE("random surveys written to a file read back equal") {
  Random random(2);
  std::string text =
      "station,survey,surveyed_at,cross_section,part,distance_m,elevation_m,level_uncertainty_m,mark,"
      "remark\n";
  std::vector<Survey> written;
  for (int i = 0; i < 40; ++i) {
    Survey survey;
    survey.station = "TAR-1";
    survey.id = fmt::format("S{}", i);
    survey.surveyed_at = some_time(random);
    survey.remark = some_remark(random);
    if (chance(random, 0.5)) survey.level_uncertainty_m = uniform(random, 0.001, 0.1);
    for (int section = 0; section < 3; ++section) {
      double distance = uniform(random, -10, 10);
      const double way = chance(random, 0.5) ? 1 : -1;
      for (int point = 0; point < 20; ++point) {
        survey.points.push_back({fmt::format("X{}", section), chance(random, 0.3) ? "left" : "main", distance,
                                 uniform(random, 0, 20), point == 3 ? "BM 1" : ""});
        if (point == 0 || chance(random, 0.8)) distance += way * uniform(random, 0, 5);
      }
    }
    for (std::size_t p = 0; p < survey.points.size(); ++p) {
      const SurveyPoint& point = survey.points[p];
      text +=
          line(random, {survey.station, survey.id, p == 0 ? text_of(survey.surveyed_at) : "",
                        point.cross_section, point.part, exact(point.distance_m), exact(point.elevation_m),
                        exact(survey.level_uncertainty_m), point.mark, survey.remark});
    }
    written.push_back(std::move(survey));
  }
  const ParsedFile file = read_text(text);
  REQUIRE(describe(file.findings) == "0 faults found\n");
  REQUIRE(file.surveys.size() == written.size());
  for (std::size_t i = 0; i < written.size(); ++i) CHECK(file.surveys[i].record == written[i]);
}

namespace {

/// A stage file in which every kind of oddity may turn up, most lines plain.
std::string odd_stage_file(Random& random, bool with_faults) {
  const bool quality = chance(random, 0.5);
  std::string text = fmt::format("station,time,{}{}\n", chance(random, 0.5) ? "stage_m" : "stage_ft",
                                 quality ? ",quality" : "");
  std::int64_t ms[2] = {1'000'000'000'000, 1'100'000'000'000};
  const int count = 1 + static_cast<int>(random() % 60);
  for (int i = 0; i < count; ++i) {
    const int station = chance(random, 0.8) ? 0 : 1;
    ms[station] += static_cast<std::int64_t>(1 + random() % 3) * 900'000 + (chance(random, 0.1) ? 250 : 0);
    std::string value = fmt::format("{:.{}f}", uniform(random, -2, 9), random() % 5);
    if (chance(random, 0.1)) value.clear();
    std::vector<std::string> fields{
        station == 0 ? "TAR-1" : "TAR-2",
        format_time(from_ms(ms[station]), UtcOffset{std::chrono::minutes(station == 0 ? 60 : 0)}), value};
    if (chance(random, 0.5)) fields[1].resize(16);
    const std::vector<std::string> words{"", "good", "suspect", "unchecked", "poor", "estimate"};
    if (quality) fields.push_back(value.empty() ? "missing" : words[random() % words.size()]);
    if (with_faults && chance(random, 0.1)) {
      const std::vector<std::string> odd{"",      "x",    "2010-02-30", "1e3", "NaN", "TAR-9", "1.123456789",
                                         "99999", "good", "#",          "-",   "1."};
      fields[random() % fields.size()] = odd[random() % odd.size()];
    }
    if (with_faults && chance(random, 0.03)) text += "\n";
    if (with_faults && chance(random, 0.03)) text += "# remark\n";
    if (with_faults && chance(random, 0.03)) fields.pop_back();
    if (with_faults && chance(random, 0.05)) ms[station] -= 3'600'000;
    std::string plain;
    for (std::size_t f = 0; f < fields.size(); ++f) plain += (f > 0 ? "," : "") + fields[f];
    text += chance(random, 0.2) ? line(random, fields) : plain + "\n";
  }
  return text;
}

bool equal(const store::StageSeries& a, const store::StageSeries& b) {
  const auto same = [](const store::StageReading& x, const store::StageReading& y) {
    return x.time == y.time && x.value == y.value && x.quality == y.quality && x.line == y.line;
  };
  return a.station == b.station && a.unit == b.unit && a.decimals == b.decimals &&
         std::equal(a.readings.begin(), a.readings.end(), b.readings.begin(), b.readings.end(), same);
}

}  // namespace

TEST_CASE("the short way of plain stage lines gives what the general way gives") {
  Random random(3);
  std::size_t faulty = 0;
  std::size_t readings = 0;
  for (int i = 0; i < 3'000; ++i) {
    const std::string text = odd_stage_file(random, i % 2 == 0);
    ReadOptions general;
    general.plain_lines = false;
    const ParsedFile a = read_text(text);
    const ParsedFile b = read_text(text, general);
    INFO(text);
    REQUIRE(describe(a.findings) == describe(b.findings));
    REQUIRE(a.rows == b.rows);
    REQUIRE(a.stage.size() == b.stage.size());
    for (std::size_t s = 0; s < a.stage.size(); ++s) {
      REQUIRE(equal(a.stage[s], b.stage[s]));
      readings += a.stage[s].readings.size();
    }
    faulty += a.findings.empty() ? 0 : 1;
  }
  // The files were neither all good nor all bad.
  CHECK(faulty > 500);
  CHECK(faulty < 1'600);
  CHECK(readings > 20'000);
}
