#include "terms/quantity.hpp"

#include <random>

using namespace scourbook;

TEST_CASE("stage and gauge zero add exactly, feet and metres alike") {
  std::mt19937_64 random(3);
  std::uniform_int_distribution<std::int64_t> hundredths(-100'000, 100'000);
  for (int i = 0; i < 10'000; ++i) {
    const std::int64_t feet = hundredths(random);
    const std::int64_t mm = hundredths(random);
    const Stage stage = Stage::from_ticks(feet * (kTicksPerFoot / 100));
    const GaugeZero zero = GaugeZero::from_ticks(mm * 100'000);
    const Level level = stage + zero;
    CHECK(level - zero == stage);
    // The double nearest to the decimal gives the same ticks.
    CHECK(Stage::from_metres(static_cast<double>(feet) / 100 * kMetresPerFoot) == stage);
    CHECK(GaugeZero::from_metres(static_cast<double>(mm) / 1000) == zero);
  }
}

TEST_CASE("metres round to the nearest tick, halves away from zero") {
  CHECK(Stage::from_metres(1.000000004).ticks() == 100'000'000);
  CHECK(Stage::from_metres(1.000000006).ticks() == 100'000'001);
  CHECK(Stage::from_metres(5e-9).ticks() == 1);
  CHECK(Stage::from_metres(-5e-9).ticks() == -1);
  CHECK(Stage::from_ticks(123'456'789).metres() == 1.23456789);
}
