// The demo must be the same on every machine, and what its story says must be in its files.

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <string>

#include "arithmetic.hpp"
#include "field.hpp"

using namespace scenario;

namespace {

const Site& tar1() {
  static const Site site = millmark();
  return site;
}
const Site& tar2() {
  static const Site site = lowbridge(tar1());
  return site;
}

const std::vector<TextFile>& files() {
  static const std::vector<TextFile> all = field_files(tar1(), tar2());
  return all;
}

const std::string& text_of(const std::string& name) {
  for (const auto& file : files()) {
    if (file.name == name) return file.text;
  }
  FAIL("no file " << name);
  static const std::string none;
  return none;
}

std::size_t count(const std::string& text, const std::string& what) {
  std::size_t n = 0;
  for (std::size_t i = text.find(what); i != std::string::npos; i = text.find(what, i + 1)) ++n;
  return n;
}

/// FNV-1a over names and texts, 64 bits.
std::uint64_t digest(const std::vector<TextFile>& all) {
  std::uint64_t h = 0xcbf29ce484222325ULL;
  for (const auto& file : all) {
    for (const char c : file.name + "\n" + file.text)
      h = (h ^ static_cast<unsigned char>(c)) * 0x100000001b3ULL;
  }
  return h;
}

}  // namespace

TEST_CASE("arithmetic of the generator agrees with the C library") {
  Random random(7);
  for (int i = 0; i < 10000; ++i) {
    const double x = 60 * random.uniform() - 30;
    CHECK(std::abs(exponential(x) / std::exp(x) - 1) < 1e-14);
    const double y = std::exp(x);
    CHECK(std::abs(logarithm(y) - std::log(y)) < 1e-14 * std::max(1.0, std::abs(x)));
    CHECK(std::abs(cosine_of_turn(x) - std::cos(2 * kPi * x)) < 1e-12);
  }
  CHECK(rounded(1.2345, 3) == 1.235);
  CHECK(significant(0.012345, 3) == 0.0123);
  CHECK(significant(98765, 3) == 98800);
}

TEST_CASE("normal numbers have mean 0 and variance 1") {
  Random random(8);
  double sum = 0, squares = 0;
  const int n = 200000;
  for (int i = 0; i < n; ++i) {
    const double x = random.normal();
    sum += x;
    squares += x * x;
  }
  CHECK(std::abs(sum / n) < 0.01);
  CHECK(std::abs(squares / n - 1) < 0.02);
}

TEST_CASE("times are read and written") {
  CHECK(at("1970-01-01T00:00", 0) == 0);
  CHECK(at("2000-02-29T12:30:05", 0) == 951827405);
  CHECK(local_text(951827405, kHour) == "2000-02-29T13:30");
  CHECK(parse_time("2020-01-14T05:30Z", kHour) == parse_time("2020-01-14T06:30+01:00", 0));
  CHECK(parse_time("2020-01-14T06:30", kHour) == parse_time("2020-01-14T06:30:00.000+01:00", 0));
  CHECK_FALSE(parse_time("2020-01-14", 0));
  for (Seconds t = at("2015-12-31T00:00"); t < at("2017-01-02T00:00"); t += 7 * kHour) {
    CHECK(parse_time(local_text(t, kHour), kHour) == t);
  }
}

TEST_CASE("the files are the same on every machine") {
  // A regression value: it changes only when somebody changes the river on purpose.
  CHECK(digest(files()) == 0x24a01cbf5747e53bULL);
}

TEST_CASE("ten water years of readings, with the gaps of the story") {
  CHECK(tar1().flow_m3s.size() == 3653 * 96);
  // 8 + 272 + 37 + 1380 + 3 readings are absent, and the header is a line.
  CHECK(count(text_of("stage_TAR-1.csv"), "\n") == 350688 - 1700 + 1);
  CHECK(count(text_of("stage_TAR-2.csv.gz"), "\n") == 350688 + 1);
  CHECK(count(text_of("stage_TAR-2.csv.gz"), ",,missing\n") == 26 + 288 + 96);
  CHECK(text_of("stage_TAR-1.csv").find("nan") == std::string::npos);
}

TEST_CASE("gaugings: 25, 4 and 3 at Millmark with one zero flow, none after the change at Lowbridge") {
  std::size_t periods[3] = {0, 0, 0};
  std::size_t late = 0;
  const std::string& text = text_of("gaugings.csv");
  for (std::size_t i = text.find('\n') + 1; i < text.size(); i = text.find('\n', i) + 1) {
    const std::string line = text.substr(i, text.find('\n', i) - i);
    const Seconds start = at(line.substr(10, 16));
    const bool at_millmark = line.compare(0, 5, "TAR-1") == 0;
    if (at_millmark) ++periods[start < tar1().states[1].from ? 0 : start < tar1().states[2].from ? 1 : 2];
    if (!at_millmark && start >= tar2().states[1].from) ++late;
  }
  CHECK(periods[0] == 25);
  CHECK(periods[1] == 4);
  CHECK(periods[2] == 3);
  CHECK(late == 0);
  CHECK(count(text, ",0,,0.005,,observed,") == 1);
}

TEST_CASE("the bed changes at the peaks of the two floods that scenario/run.sh names") {
  REQUIRE(tar1().states.size() == 3);
  CHECK(local_text(tar1().states[1].from, kHour) == "2020-01-14T06:30");
  CHECK(local_text(tar1().states[2].from, kHour) == "2022-11-21T10:00");
  REQUIRE(tar2().states.size() == 2);
  CHECK(local_text(tar2().states[1].from, kHour) == "2020-01-14T10:45");
  CHECK(tar1().states[1].curve.level(3) - tar1().states[0].curve.level(3) > 0.1);
  CHECK(tar1().states[2].curve.level(3) - tar1().states[1].curve.level(3) < -0.15);
}

TEST_CASE("the second survey is without the meadow; the parts of the others are main and meadow") {
  CHECK(count(text_of("survey_M2015.csv"), ",meadow,") > 8);
  CHECK(count(text_of("survey_M2020.csv"), ",meadow,") == 0);
  CHECK(count(text_of("survey_M2020.csv"), ",BAR,main,") > 20);
  CHECK(count(text_of("survey_M2020.csv"), ",pile wall\n") == 1);
  CHECK(count(text_of("survey_M2022.csv"), ",meadow,") > 8);
}

TEST_CASE("the true curves rise, and level is the inverse of flow") {
  for (const Site* site : {&tar1(), &tar2()}) {
    for (const State& state : site->states) {
      CHECK(state.curve.flow(state.curve.cease_to_flow_m()) == 0);
      double before = 0;
      for (double q = 0.01; q < 0.9 * state.curve.top_flow(); q *= 1.07) {
        const double z = state.curve.level(q);
        CHECK(z > before);
        CHECK(std::abs(state.curve.flow(z) / q - 1) < 1e-9);
        before = z;
      }
    }
  }
}

TEST_CASE("critical flow over a rectangle is that of the handbooks") {
  // Q = C sqrt(g) (2/3)^1.5 b H^1.5 = 1.705 b H^1.5, for a broad crest (ISO 3846); the channel is far too
  // wide to count.
  const Bed crest{{0, 10}, {0, 1}, {4, 1}, {4, 10}};
  const Bed channel{{0, 10}, {0, 0}, {500, 0}, {500, 10}};
  const TrueCurve curve(&crest, 1, channel, {0.01, 0.02, 0.02}, 3);
  CHECK(curve.flow(1.9) == Approx(1.705 * 4 * std::pow(0.9, 1.5)).epsilon(5e-4));
}

TEST_CASE("conveyed flow of a wide flat bed is Manning's") {
  // Depth 2 m: n of the strip is n (1 + 0.3 / 9); the two vertical banks carry nothing.
  const Bed bed{{0, 10}, {0, 0}, {100, 0}, {100, 10}};
  const double expected = std::sqrt(0.001) / (0.03 * (1 + 0.3 / 9)) * 200 * std::pow(2.0, 2.0 / 3);
  CHECK(conveyed_flow(bed, {0.001, 0.03, 0.06}, 2, false) == Approx(expected).epsilon(1e-12));
}
