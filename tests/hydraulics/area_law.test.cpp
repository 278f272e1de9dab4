// The area law: sections that are power laws, the fit against an independent one, units, statuses.

#include "hydraulics/area_law.hpp"

#include <cmath>
#include <limits>

#include "hydraulics/sections.hpp"

using namespace scourbook;
using namespace scourbook::hydraulics;
using made::Point;
using made::Random;
using made::section;
using made::trapezoid;

namespace {

/// A section of half width k z^p on both sides of its axis, area 2 k z^(p+1) / (p+1), its points in geometric
/// progression: the law's exponent is then exact, its coefficient off by the chords alone.
std::vector<Point> power_section(double k, double p, double height, double ratio) {
  std::vector<Point> right;
  for (double z = height; z > 1e-7 * height; z /= ratio) right.push_back({k * std::pow(z, p), z});
  std::vector<Point> all;
  for (const Point& point : right) all.push_back({-point.x, point.z});
  all.push_back({0, 0});
  all.insert(all.end(), right.rbegin(), right.rend());
  return all;
}

struct Fit {
  double intercept = 0, slope = 0, sum_of_squares = 0;
};

/// Straight line of ln area on ln(level - h0), by the normal equations in long double with the library's
/// logarithm.
Fit fitted(const SectionPart& part, LevelRange range, double h0) {
  long double n = 0, sx = 0, sy = 0, sxx = 0, sxy = 0;
  std::vector<std::pair<long double, long double>> logs;
  for (int i = 0; i < 80; ++i) {
    const double level = range.from_m + (range.to_m - range.from_m) * (0.05 + 0.95 * i / 79);
    const long double x = std::log(static_cast<long double>(level) - h0);
    const long double y = std::log(static_cast<long double>(part.at(level).area_m2));
    logs.emplace_back(x, y);
    n += 1, sx += x, sy += y, sxx += x * x, sxy += x * y;
  }
  const long double slope = (n * sxy - sx * sy) / (n * sxx - sx * sx), intercept = (sy - slope * sx) / n;
  Fit fit{static_cast<double>(intercept), static_cast<double>(slope), 0};
  long double sum = 0;
  for (const auto& [x, y] : logs) sum += (y - intercept - slope * x) * (y - intercept - slope * x);
  fit.sum_of_squares = static_cast<double>(sum);
  return fit;
}

LevelRange range_of(const std::vector<Point>& points) {
  const SectionPart part = section(points);
  return {part.lowest_m(), part.lower_end_m()};
}

double share(const AreaLaw& law, LevelRange range) {
  return (law.h0_m - range.from_m) / (range.to_m - range.from_m);
}

}  // namespace

TEST_CASE("80 levels from 5 % of the depth to the top") {
  const std::vector<double> levels = law_levels({12, 14});
  REQUIRE(levels.size() == 80);
  CHECK(levels.front() == Approx(12.1).epsilon(1e-15));
  CHECK(levels.back() == 14);
  for (std::size_t i = 1; i < levels.size(); ++i) CHECK(levels[i] - levels[i - 1] == Approx(1.9 / 79));
  // the last one is the top itself, whatever rounding does: above it the section's walls would begin
  Random random(20);
  for (int i = 0; i < 200; ++i) {
    const double from = random.between(-5, 0), to = random.between(0, 2);
    CHECK(law_levels({from, to}).back() == to);
  }
}

TEST_CASE("a triangle has c = 2, a rectangle c = 1, wherever the datum") {
  for (const double datum : {0.0, -3.0, 812.5}) {
    for (const bool free : {false, true}) {
      CAPTURE(datum, free);
      const auto fit = [&](const std::vector<Point>& points) {
        const LevelRange range{datum, datum + 2.5};
        const AreaLawFit f =
            free ? fit_area_law_free_offset(section(points), range) : fit_area_law(section(points), range);
        REQUIRE(f.status == LawStatus::ok);
        CHECK(f.law.h0_m == Approx(datum).margin(1e-11));
        CHECK(f.law.max_misfit < 1e-10);
        CHECK(f.law.missed_levels_m.empty());
        CHECK_FALSE(f.law.narrow_slot);
        return f.law;
      };
      const AreaLaw triangle = fit(trapezoid(0, 1.7, 3, datum));
      CHECK(triangle.c == Approx(2).epsilon(1e-10));
      CHECK(triangle.w == Approx(1.7).epsilon(1e-10));
      const AreaLaw rectangle = fit(trapezoid(8, 0, 3, datum));
      CHECK(rectangle.c == Approx(1).epsilon(1e-10));
      CHECK(rectangle.w == Approx(8).epsilon(1e-10));
    }
  }
}

TEST_CASE("a parabola has c = 3/2 and w = 4/3 over the root of its curvature") {
  // z = a x^2: half width z^(1/2) / a^(1/2)
  const double a = 0.04;
  const std::vector<Point> points = power_section(1 / std::sqrt(a), 0.5, 4, 1.002);
  for (const auto fit : {fit_area_law, fit_area_law_free_offset}) {
    const AreaLawFit f = fit(section(points), {0, 4});
    REQUIRE(f.status == LawStatus::ok);
    CHECK(f.law.c == Approx(1.5).epsilon(1e-6));
    CHECK(f.law.w == Approx(4 / (3 * std::sqrt(a))).epsilon(1e-6));
    CHECK(f.law.h0_m == Approx(0).margin(1e-5));
  }
}

TEST_CASE("any power-law section gives back its exponent") {
  for (const double p : {0.1, 0.3, 0.8, 1.4, 2.0}) {
    CAPTURE(p);
    const AreaLawFit f = fit_area_law(section(power_section(6, p, 3, 1.002)), {0, 3});
    CHECK(f.law.c == Approx(p + 1).epsilon(1e-6));
    CHECK(f.law.w == Approx(12 / (p + 1)).epsilon(1e-5));
  }
}

TEST_CASE("the free offset finds a level bed above a slit that reaches deeper, and not without freedom") {
  // 10 m wide from 0.04 of the depth on; below, a slit of no width to speak of
  const SectionPart part =
      section({{0, 10}, {0, 0.4}, {5, 0.4}, {5, 0}, {5 + 1e-9, 0}, {5 + 1e-9, 0.4}, {10, 0.4}, {10, 10}});
  const LevelRange range{0, 10};
  const AreaLawFit free = fit_area_law_free_offset(part, range);
  CHECK(free.law.h0_m == Approx(0.4).epsilon(1e-8));
  CHECK(free.law.c == Approx(1).epsilon(1e-8));
  CHECK(free.law.w == Approx(10).epsilon(1e-8));
  const AreaLawFit fixed = fit_area_law(part, range);
  CHECK(fixed.law.h0_m == 0);
  CHECK(fixed.law.max_misfit > 0.5);
}

TEST_CASE("the free offset stays within its bounds") {
  // a box below wide banks: the law would like an offset far below the bed
  const std::vector<Point> box{{0, 3}, {8, 1}, {10, 1}, {10, 0}, {20, 0}, {20, 1}, {22, 1}, {30, 3}};
  const LevelRange low{0, 2.5};
  CHECK(share(fit_area_law_free_offset(section(box), low).law, low) == -0.05);
  // the same slit, deeper than the offset may rise
  const SectionPart slit =
      section({{0, 0.8}, {5, 0.8}, {5, 0}, {5.001, 0}, {5.001, 0.8}, {10, 0.8}, {10, 10}});
  const LevelRange range{0, 10};
  CHECK(share(fit_area_law_free_offset(slit, range).law, range) == Approx(0.045).epsilon(1e-12));
}

TEST_CASE("the fixed-offset law agrees with an independent fit") {
  Random random(21);
  for (int i = 0; i < 100; ++i) {
    const std::vector<Point> points = made::natural_points(random);
    const LevelRange range = range_of(points);
    const AreaLawFit f = fit_area_law(section(points), range);
    const Fit other = fitted(section(points), range, range.from_m);
    REQUIRE(f.status == LawStatus::ok);
    CHECK(f.law.h0_m == range.from_m);
    CHECK(f.law.c == Approx(other.slope).epsilon(1e-11));
    CHECK(f.law.w == Approx(std::exp(other.intercept)).epsilon(1e-11));
  }
}

TEST_CASE(
    "no offset of a fine grid fits better than the free one; the law there agrees with an independent fit") {
  Random random(22);
  int inside = 0;
  for (int i = 0; i < 60; ++i) {
    CAPTURE(i);
    const std::vector<Point> points = made::natural_points(random);
    const LevelRange range = range_of(points);
    const double depth = range.to_m - range.from_m;
    const AreaLawFit f = fit_area_law_free_offset(section(points), range);
    REQUIRE(f.status == LawStatus::ok);
    const double x = share(f.law, range);
    REQUIRE(x >= -0.05 - 1e-12);
    REQUIRE(x <= 0.045 + 1e-12);
    inside += x > -0.0499 && x < 0.0449;
    const Fit here = fitted(section(points), range, f.law.h0_m);
    CHECK(f.law.c == Approx(here.slope).epsilon(1e-9));
    CHECK(f.law.w == Approx(std::exp(here.intercept)).epsilon(1e-9));
    for (int j = 0; j <= 475; ++j) {
      const double other =
          fitted(section(points), range, range.from_m + depth * (-0.05 + 0.0002 * j)).sum_of_squares;
      CHECK(here.sum_of_squares <= other * (1 + 1e-9) + 1e-13);
    }
  }
  CHECK(inside > 10);  // or the test would only look at bounds
}

TEST_CASE("the law of a section does not hang on its unit, datum, place or bank") {
  constexpr double kFoot = 0.3048;
  Random random(23);
  double worst_h0 = 0, worst_c = 0, worst_w = 0;
  for (int i = 0; i < 150; ++i) {
    const std::vector<Point> points = made::natural_points(random);
    const LevelRange range = range_of(points);
    const double depth = range.to_m - range.from_m;
    for (const bool free : {false, true}) {
      const auto fit = free ? fit_area_law_free_offset : fit_area_law;
      const AreaLaw law = fit(section(points), range).law;
      const auto compare = [&](const AreaLaw& other, double h0, double w_factor) {
        worst_h0 = std::max(worst_h0, std::abs(h0 - law.h0_m) / depth);
        worst_c = std::max(worst_c, std::abs(other.c / law.c - 1));
        worst_w = std::max(worst_w, std::abs(other.w * w_factor / law.w - 1));
      };
      const AreaLaw feet =
          fit(section(made::scaled(points, 1 / kFoot, 1 / kFoot)), {range.from_m / kFoot, range.to_m / kFoot})
              .law;
      compare(feet, feet.h0_m * kFoot, std::pow(kFoot, 2 - feet.c));
      const AreaLaw elsewhere =
          fit(section(made::moved(points, 77.7, -12.34)), {range.from_m - 12.34, range.to_m - 12.34}).law;
      compare(elsewhere, elsewhere.h0_m + 12.34, 1);
      const AreaLaw bank = fit(section(made::reversed(points)), range).law;
      compare(bank, bank.h0_m, 1);
    }
  }
  CAPTURE(worst_h0, worst_c, worst_w);
  CHECK(worst_h0 < 1e-10);
  CHECK(worst_c < 1e-10);
  CHECK(worst_w < 1e-10);
}

TEST_CASE("the law follows small changes of the section by small changes") {
  Random random(24);
  for (int i = 0; i < 60; ++i) {
    std::vector<Point> points = made::natural_points(random);
    const LevelRange range = range_of(points);
    const AreaLaw before = fit_area_law_free_offset(section(points), range).law;
    for (std::size_t j = 1; j + 1 < points.size(); ++j) points[j].z += random.between(0, 1e-7);
    const AreaLaw after = fit_area_law_free_offset(section(points), range).law;
    CHECK(std::abs(after.h0_m - before.h0_m) < 1e-4);
    CHECK(after.c == Approx(before.c).epsilon(1e-4));
    CHECK(after.w == Approx(before.w).epsilon(1e-4));
  }
}

TEST_CASE("misfit is told, level by level") {
  const SectionPart part = section({{0, 5}, {0, 2}, {10, 2}, {10, 0}, {12, 0}, {12, 5}});
  const LevelRange range{0, 5};
  const AreaLaw law = fit_area_law(part, range).law;
  double largest = 0;
  std::vector<double> missed;
  for (const double level : law_levels(range)) {
    const double misfit = std::abs(law.w * std::pow(level, law.c) / part.at(level).area_m2 - 1);
    largest = std::max(largest, misfit);
    if (misfit > 0.1) missed.push_back(level);
  }
  CHECK(law.max_misfit == Approx(largest).epsilon(1e-9));
  CHECK(law.missed_levels_m == missed);
  CHECK(missed.size() > 10);
  CHECK(missed.size() < 80);
}

TEST_CASE("a narrow slot: under 0.1 % of the area in the lowest 5 % of the depth") {
  const LevelRange range{0, 10};
  // a slot down to 0 and 0.5 m deep holds 0.5 times its width; the whole is 95 m2 and the slot's
  const auto slot = [&](double width) {
    return fit_area_law(section({{0, 10},
                                 {0, 0.5},
                                 {4, 0.5},
                                 {4, 0},
                                 {4 + width, 0},
                                 {4 + width, 0.5},
                                 {10, 0.5},
                                 {10, 10}}),
                        range)
        .law.narrow_slot;
  };
  CHECK(slot(0.18));
  CHECK_FALSE(slot(0.20));
}

TEST_CASE("status where no law can be fitted") {
  const SectionPart part = section(trapezoid(4, 1, 3));
  const double nan = std::numeric_limits<double>::quiet_NaN(),
               infinity = std::numeric_limits<double>::infinity();
  for (const auto fit : {fit_area_law, fit_area_law_free_offset}) {
    CHECK(fit(part, {1, 1}).status == LawStatus::empty_range);
    CHECK(fit(part, {2, 1}).status == LawStatus::empty_range);
    CHECK(fit(part, {nan, 1}).status == LawStatus::empty_range);
    CHECK(fit(part, {0, infinity}).status == LawStatus::empty_range);
    CHECK(fit(part, {-5, -1}).status == LawStatus::nowhere_wet);
    CHECK(fit(part, {-5, 0.001}).status == LawStatus::nowhere_wet);  // the topmost level alone
    CHECK(fit(SectionPart(std::vector<Strip>{}), {0, 1}).status == LawStatus::nowhere_wet);
    CHECK(fit(section({{0, 3}, {0, 0}}), {0, 2}).status == LawStatus::nowhere_wet);  // a wall alone
  }
  CHECK(AreaLawFit{}.status == LawStatus::not_run);
}

TEST_CASE("levels below the bed take no part, and are told") {
  // the range starts 1 m below a bed of 4 m width: 1 of 4 m dry
  const AreaLawFit f = fit_area_law(section(trapezoid(4, 0, 5)), {-1, 3});
  REQUIRE(f.status == LawStatus::ok);
  std::size_t dry = 0;
  for (const double level : law_levels({-1, 3})) dry += level <= 0;
  REQUIRE(dry == 17);
  REQUIRE(f.law.missed_levels_m.size() >= dry);
  CHECK(f.law.missed_levels_m[dry - 1] <= 0);
  CHECK(std::isfinite(f.law.max_misfit));
}

TEST_CASE("a range that begins above the bed keeps the offset at the bed") {
  const SectionPart box = section(trapezoid(4, 0, 5));
  const AreaLaw fixed = fit_area_law(box, {1, 4, 0}).law;
  CHECK(fixed.h0_m == 0);
  CHECK(fixed.c == Approx(1).epsilon(1e-12));
  CHECK(fixed.w == Approx(4).epsilon(1e-12));
  const AreaLaw free = fit_area_law_free_offset(box, {1, 4, 0}).law;
  CHECK(free.h0_m == Approx(0).margin(1e-6));
  CHECK(free.c == Approx(1).epsilon(1e-6));
  CHECK(fit_area_law(box, {1, 4}).law.h0_m == 1);
}
