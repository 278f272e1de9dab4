#include "cli/edition_report.hpp"

#include <catch2/catch.hpp>

using namespace scourbook;
using namespace scourbook::cli;

namespace {

Instant day(int n) {
  return from_ms(std::int64_t{86'400'000} * n);
}

Period period(int from, std::optional<int> until, std::optional<int> curve, int blend_hours = 0) {
  Period p;
  p.from = day(from);
  if (until) p.until = day(*until);
  p.curve = curve;
  p.none = NoCurve::works;
  p.blend = Millis(std::int64_t{3'600'000} * blend_hours);
  return p;
}

}  // namespace

TEST_CASE("changes between two editions are the stretches that they treat differently") {
  const std::vector<Period> before = {period(0, 10, 1), period(10, {}, 2)};

  CHECK(changes_between(before, before).empty());

  const auto changes = changes_between(before, {period(0, 5, 1), period(5, 10, 3), period(10, {}, 2)});
  REQUIRE(changes.size() == 1);
  CHECK(changes[0].from == day(5));
  CHECK(changes[0].until == day(10));
  CHECK(changes[0].before == "curve 1");
  CHECK(changes[0].after == "curve 3");
}

TEST_CASE("an open end, a gap and a blend are changes too") {
  const auto open = changes_between({period(0, 10, 1)}, {period(0, {}, 1)});
  REQUIRE(open.size() == 1);
  CHECK(open[0].from == day(10));
  CHECK_FALSE(open[0].until.has_value());
  CHECK(open[0].before == "no period");
  CHECK(open[0].after == "curve 1");

  const auto blend =
      changes_between({period(0, 10, 1), period(10, {}, 2)}, {period(0, 10, 1), period(10, {}, 2, 12)});
  REQUIRE(blend.size() == 1);
  CHECK(blend[0].from == day(10));
  CHECK(blend[0].until == day(10) + Millis(43'200'000));
  CHECK(blend[0].after == "curve 2 (blend)");

  const auto works =
      changes_between({period(0, {}, 1)}, {period(0, 3, 1), period(3, 4, {}), period(4, {}, 1)});
  REQUIRE(works.size() == 1);
  CHECK(works[0].after == "none (works)");
}
