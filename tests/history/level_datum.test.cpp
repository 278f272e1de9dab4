#include "history/level_datum.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#include "book_fixture.hpp"

using namespace book_fixture;
using history::LevelDatum;

namespace {

template <class Record>
Stored<Record> stored(Record record) {
  Stored<Record> row;
  row.value = std::move(record);
  return row;
}

Stored<StageCorrection> correction(const std::string& from, const std::string& until, std::int64_t first,
                                   std::int64_t last) {
  return stored(StageCorrection{"H-1", at(from), at(until), HeightChange::from_ticks(first),
                                HeightChange::from_ticks(last), ""});
}

}  // namespace

TEST_CASE("a level is stage, zero and corrections added as whole ticks") {
  const LevelDatum datum({stored(zero("2020-01-01T00:00Z", 99.5)), stored(zero("2020-02-01T00:00Z", 99.25))},
                         {correction("2020-01-10T00:00Z", "2020-01-11T00:00Z", 0, 100)});
  const Stage stage = Stage::from_metres(1.234);
  CHECK_FALSE(datum.level(stage, at("2019-12-31T23:59:59.999Z")));
  CHECK(datum.level(stage, at("2020-01-01T00:00Z"))->ticks() == 10'073'400'000);
  CHECK(datum.level(stage, at("2020-01-31T23:59:59.999Z"))->ticks() == 10'073'400'000);
  CHECK(datum.level(stage, at("2020-02-01T00:00Z"))->ticks() == 10'048'400'000);
  CHECK(datum.zero_at(at("2030-01-01T00:00Z")) == GaugeZero::from_metres(99.25));
  // Linear, rounded to a tick, halves away from zero; the end is not in it.
  CHECK(datum.correction_at(at("2020-01-10T00:00Z")).ticks() == 0);
  CHECK(datum.correction_at(at("2020-01-10T06:00Z")).ticks() == 25);
  CHECK(datum.correction_at(at("2020-01-10T06:07:12Z")).ticks() == 26);  // 25.5
  CHECK(datum.correction_at(at("2020-01-10T23:59:59.999Z")).ticks() == 100);
  CHECK(datum.correction_at(at("2020-01-11T00:00Z")).ticks() == 0);
}

TEST_CASE("corrections that overlap add up, each rounded by itself") {
  const LevelDatum datum({}, {correction("2020-01-10T00:00Z", "2020-01-12T00:00Z", -3, -3),
                              correction("2020-01-11T00:00Z", "2020-01-13T00:00Z", 0, 5)});
  CHECK(datum.correction_at(at("2020-01-11T12:00Z")).ticks() == -3 + 1);  // 1.25
  CHECK(datum.correction_at(at("2020-01-12T12:00Z")).ticks() == 4);       // 3.75
}

TEST_CASE("many readings at once are the same as one by one") {
  std::mt19937 engine(3);
  for (int round = 0; round < 50; ++round) {
    std::vector<Stored<GaugeZeroRow>> zeros;
    std::vector<Stored<StageCorrection>> corrections;
    const auto moment = [&](int days) { return at("2020-01-01T00:00Z") + std::chrono::hours(24 * days + 5); };
    for (int day = 3; day < 30; day += 1 + int(engine() % 9)) {
      zeros.push_back(
          stored(GaugeZeroRow{"H-1", moment(day), GaugeZero::from_ticks(std::int64_t(engine())), ""}));
    }
    for (int i = 0; i < 4; ++i) {
      const int from = int(engine() % 28);
      corrections.push_back(
          stored(StageCorrection{"H-1", moment(from), moment(from + 1 + int(engine() % 9)),
                                 HeightChange::from_ticks(std::int64_t(engine() % 9'000'000)),
                                 HeightChange::from_ticks(-std::int64_t(engine() % 9'000'000)), ""}));
    }
    const LevelDatum datum(zeros, corrections);
    std::vector<std::int64_t> times, ticks;
    for (std::int64_t t = to_ms(at("2020-01-01T00:00Z")); t < to_ms(at("2020-02-01T00:00Z"));
         t += 3'600'000) {
      times.push_back(t);
      ticks.push_back(engine() % 20 == 0 ? store::kMissing : std::int64_t(engine()));
    }
    const auto levels = datum.levels_m(times, ticks);
    REQUIRE(levels.size() == times.size());
    for (std::size_t i = 0; i < times.size(); ++i) {
      const auto one = datum.level(Stage::from_ticks(ticks[i]), from_ms(times[i]));
      if (ticks[i] == store::kMissing || !one) {
        REQUIRE(std::isnan(levels[i]));
      } else {
        REQUIRE(levels[i] == one->metres());
      }
    }
  }
}
