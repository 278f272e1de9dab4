// A published rating table that was interpolated logarithmically over an offset: USGS station 01541303,
// rating 11.0, expanded table as served (tests/outside/data/usgs_01541303_expanded.csv, seen).

#include <cmath>

#include "hydraulics/power.hpp"
#include "outside/published.hpp"

using namespace scourbook::hydraulics;

TEST_CASE("a power law over the published offset gives every value between the ends of a rating table") {
  const auto rows = published::rows("usgs_01541303_expanded.csv");
  REQUIRE(rows.size() == 9);
  constexpr double kOffset = 2.00;  // ft, as published
  const auto depth = [&](std::size_t i) { return rows[i].number("gage_height_ft") - kOffset; };
  const auto flow = [&](std::size_t i) { return rows[i].number("discharge_cfs"); };
  const double exponent = reproducible_log(flow(8) / flow(0)) / reproducible_log(depth(8) / depth(0));
  double worst_straight = 0;
  for (std::size_t i = 1; i < 8; ++i) {
    CAPTURE(rows[i].text("gage_height_ft"));
    CHECK(std::abs(flow(0) * reproducible_pow(depth(i) / depth(0), exponent) - flow(i)) <= 0.005);
    const double straight = flow(0) + (flow(8) - flow(0)) * static_cast<double>(i) / 8;
    worst_straight = std::max(worst_straight, std::abs(straight - flow(i)));
  }
  CHECK(worst_straight > 0.3);  // a straight line does not
}
