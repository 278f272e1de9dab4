#include "cli/period_words.hpp"

#include <catch2/catch.hpp>

using namespace scourbook;
using namespace scourbook::cli;

namespace {

const UtcOffset kHour{std::chrono::minutes(60)};

Instant utc(const char* text) {
  return parse_time(text, UtcOffset{}).time;
}

}  // namespace

TEST_CASE("a period's words: curve, begin, end, blend") {
  const auto plain = adoption_of("3,2020-01-14T07:30", kHour);
  CHECK(plain.period.curve == 3);
  CHECK(plain.period.from == utc("2020-01-14T06:30"));
  CHECK_FALSE(plain.period.until.has_value());
  CHECK_FALSE(plain.ends_open);
  CHECK(plain.period.blend == Millis(0));

  const auto whole = adoption_of("3,2020-01-14T07:30,2021-01-01T00:00Z,blend=1.5", kHour);
  CHECK(whole.period.until == utc("2021-01-01T00:00"));
  CHECK(whole.period.blend == Millis(5'400'000));

  const auto open = adoption_of("none:ice,2020-01-14,open", kHour);
  CHECK_FALSE(open.period.curve.has_value());
  CHECK(open.period.none == NoCurve::ice);
  CHECK(open.ends_open);
}

TEST_CASE("words that are no period are told with what was expected") {
  using Catch::Matchers::Contains;
  CHECK_THROWS_WITH(adoption_of("3", kHour), Contains("CURVE,FROM"));
  CHECK_THROWS_WITH(adoption_of("three,2020-01-14", kHour), Contains("\"three\" is no curve"));
  CHECK_THROWS_WITH(adoption_of("3x,2020-01-14", kHour), Contains("\"3x\" is no curve"));
  CHECK_THROWS_WITH(adoption_of("0,2020-01-14", kHour), Contains("\"0\" is no curve"));
  CHECK_THROWS_WITH(adoption_of("none:frost,2020-01-14", kHour), Contains("none:ice"));
  CHECK_THROWS_WITH(adoption_of("3,2020-02-30", kHour), Contains("2020-02-30"));
  CHECK_THROWS_WITH(adoption_of("3,2020-01-14,2021-01-01,2022-01-01", kHour), Contains("CURVE,FROM"));
  CHECK_THROWS_WITH(adoption_of("3,2020-01-14,blend=-1", kHour), Contains("hours"));
  CHECK_THROWS_WITH(adoption_of("3,2020-01-14,blend=nan", kHour), Contains("hours"));
  CHECK_THROWS_WITH(adoption_of("3,2020-01-14,shift=1", kHour), Contains("\"shift=1\" is not known"));
}
