// Manning, Chezy and critical flow of a section itself.

#include "hydraulics/uniform_flow.hpp"

#include <cmath>

#include "hydraulics/sections.hpp"
#include "terms/quantity.hpp"

using namespace scourbook;
using namespace scourbook::hydraulics;
using made::Point;
using made::Random;
using made::section;
using made::trapezoid;

namespace {

/// Greatest A sqrt(2 g (head - y)) over many surfaces y.
double greatest_discharge(const SectionPart& crest, double head) {
  constexpr int kSurfaces = 5000;
  double greatest = 0;
  for (int i = 0; i <= kSurfaces; ++i) {
    const double y = crest.lowest_m() + (head - crest.lowest_m()) * i / kSurfaces;
    greatest = std::max(greatest, crest.at(y).area_m2 * std::sqrt(2 * kGravity * (head - y)));
  }
  return greatest;
}

/// Head over a critical surface: y + A / (2 T).
double head_of(const SectionPart& crest, double y) {
  const SectionElements e = crest.at(y);
  return y + e.area_m2 / (2 * e.top_width_m);
}

}  // namespace

TEST_CASE("Manning and Chezy by hand") {
  // A 12, P 10, R 1.2
  const SectionElements e = section({{0, 2}, {0, 0}, {6, 0}, {6, 2}}).at(2);
  REQUIRE(e.hydraulic_radius_m() == 1.2);
  CHECK(manning_flow(e, 0.0016, 0.02) == Approx(12 * std::cbrt(1.44) * 0.04 / 0.02).epsilon(1e-14));
  CHECK(chezy_flow(e, 0.0003, 50) == Approx(50 * 12 * std::sqrt(0.00036)).epsilon(1e-14));
  CHECK(manning_flow({}, 0.0016, 0.02) == 0);
  CHECK(chezy_flow({}, 0.0016, 50) == 0);
}

TEST_CASE("Chezy's C = R^(1/6) / n gives Manning's flow") {
  Random random(41);
  for (int i = 0; i < 200; ++i) {
    const std::vector<Point> points = made::natural_points(random);
    const SectionElements e = section(points).at(made::highest(points) - random.between(0, 0.5));
    const double n = random.between(0.01, 0.2), slope = std::exp(random.between(-11, -3));
    const double c = std::pow(e.hydraulic_radius_m(), 1.0 / 6) / n;
    CHECK(chezy_flow(e, slope, c) == Approx(manning_flow(e, slope, n)).epsilon(1e-13));
  }
}

TEST_CASE("flow follows slope by its root and roughness inversely, and lengths by the power 8/3") {
  const std::vector<Point> points = trapezoid(4, 1.5, 3);
  const SectionElements e = section(points).at(2);
  const double flow = manning_flow(e, 0.001, 0.03);
  CHECK(manning_flow(e, 0.004, 0.03) == Approx(2 * flow).epsilon(1e-14));
  CHECK(manning_flow(e, 0.001, 0.06) == Approx(flow / 2).epsilon(1e-14));
  const SectionElements larger = section(made::scaled(points, 3, 3)).at(6);
  CHECK(manning_flow(larger, 0.001, 0.03) == Approx(std::pow(3, 8.0 / 3) * flow).epsilon(1e-13));
}

TEST_CASE("summed conveyance of a compound section: interfaces hold nothing back") {
  // two equal halves of a level bed between frictionless walls carry what the whole does
  const SectionPart whole = section({{0, 0}, {10, 0}}), half = section({{0, 0}, {5, 0}});
  CHECK(2 * manning_flow(half.at(1.3), 0.001, 0.03) ==
        Approx(manning_flow(whole.at(1.3), 0.001, 0.03)).epsilon(1e-14));
}

TEST_CASE("critical flow at a surface") {
  const SectionPart box = section({{0, 0}, {4, 0}});
  CHECK(critical_flow_at_surface(box, 0.5) == Approx(4 * std::sqrt(kGravity * 0.125)).epsilon(1e-14));
  CHECK(critical_flow_at_surface(box, 0) == 0);
  CHECK(critical_flow_at_surface(box, -1) == 0);
  const SectionPart triangle = section(trapezoid(0, 1.5, 3));
  CHECK(critical_flow_at_surface(triangle, 1) == Approx(1.5 * std::sqrt(kGravity * 0.5)).epsilon(1e-14));
}

TEST_CASE("a crest passes nothing at or below its lowest point, and the coefficient multiplies") {
  const SectionPart crest = section(trapezoid(2, 4, 1, 50));
  CHECK(crest_flow(crest, 50, 1) == 0);
  CHECK(crest_flow(crest, 49, 1) == 0);
  CHECK(crest_flow(crest, 50.6, 0.9) == Approx(0.9 * crest_flow(crest, 50.6, 1)).epsilon(1e-15));
  CHECK(crest_flow(SectionPart(std::vector<Strip>{}), 3, 1) == 0);
}

TEST_CASE("crests of rectangle and triangle in closed form, above their banks too") {
  const SectionPart box = section({{0, 10}, {7, 10}}), triangle = section(trapezoid(0, 2, 100, 10));
  const SectionPart low_walls = section({{0, 10.1}, {0, 10}, {7, 10}, {7, 10.1}});
  for (const double head : {1e-6, 0.02, 0.7, 5.0}) {
    const double wide = 7 * std::pow(2.0 / 3, 1.5) * std::sqrt(kGravity) * std::pow(head, 1.5);
    // 1e-15 m of the level's own rounding against the head
    const double tolerance = 1e-13 + 1e-14 / head;
    CHECK(crest_flow(box, 10 + head, 1) == Approx(wide).epsilon(tolerance));
    CHECK(crest_flow(low_walls, 10 + head, 1) == Approx(wide).epsilon(tolerance));
    const double narrow = 2 * std::pow(0.8, 2.5) * std::sqrt(kGravity / 2) * std::pow(head, 2.5);
    CHECK(crest_flow(triangle, 10 + head, 1) == Approx(narrow).epsilon(tolerance));
  }
}

TEST_CASE("the flow over a crest is the critical flow whose surface plus A / (2 T) is the head") {
  // hollow and banks without berms, where each head has one critical surface
  const SectionPart crest = section({{0, 2}, {3, 0.8}, {5, 0.1}, {6, 0}, {8, 0.3}, {10, 2}});
  for (double y = 0.02; y < 2.5; y += 0.0137) {
    CHECK(crest_flow(crest, head_of(crest, y), 1) ==
          Approx(critical_flow_at_surface(crest, y)).epsilon(1e-12));
  }
}

TEST_CASE("the flow over any crest is the greatest discharge under its head, and never falls") {
  Random random(42);
  for (int i = 0; i < 80; ++i) {
    CAPTURE(i);
    const std::vector<Point> points = i % 2 ? made::odd_points(random) : made::natural_points(random);
    const SectionPart crest = section(points);
    double below = 0;
    for (int j = 0; j <= 60; ++j) {
      const double head = crest.lowest_m() + (made::highest(points) + 0.7 - crest.lowest_m()) * j / 60;
      const double flow = crest_flow(crest, head, 1);
      CHECK(flow >= below);
      below = flow;
      if (j % 10 == 5) {
        const double wanted = greatest_discharge(crest, head);
        CHECK(flow >= wanted * (1 - 1e-13));
        // the search misses the best surface by up to half its step, a square of which enters
        CHECK(flow <= wanted * (1 + 1e-3));
      }
    }
  }
}

TEST_CASE("critical surfaces just at bed points are found as well") {
  Random random(43);
  for (int i = 0; i < 200; ++i) {
    const SectionPart crest = section(made::natural_points(random));
    for (const double y : crest.elevations_m()) {
      const SectionElements e = crest.at(y);
      if (!(e.top_width_m > 0)) continue;
      const double head = y + e.area_m2 / (2 * e.top_width_m);
      CHECK(crest_flow(crest, head, 1) >= e.area_m2 * std::sqrt(2 * kGravity * (head - y)));
    }
  }
}

TEST_CASE("a berm: the flow stays continuous where the critical surface leaps over the jump in width") {
  // notch 1 m wide and 0.5 m deep in a crest 21 m wide
  const SectionPart crest =
      section({{0, 2}, {0, 0.5}, {10, 0.5}, {10, 0}, {11, 0}, {11, 0.5}, {21, 0.5}, {21, 2}});
  const double notch = std::pow(2.0 / 3, 1.5) * std::sqrt(kGravity);
  // the notch alone, until the surface would reach the berm and the wide crest carries more
  CHECK(crest_flow(crest, 0.5, 1) == Approx(notch * std::pow(0.5, 1.5)).epsilon(1e-13));
  // from 0.5 m on the berm: the surface y of 21 m width with A = 0.5 + 21 (y - 0.5)
  const double head = 1.4, y = head - (0.5 + 21 * (head - 0.5)) / (3 * 21);
  CHECK(crest_flow(crest, head, 1) == Approx(critical_flow_at_surface(crest, y)).epsilon(1e-12));
  double steepest = 0;
  for (double h = 0.3; h < 1.5; h += 1e-4) {
    steepest = std::max(steepest, crest_flow(crest, h + 1e-4, 1) - crest_flow(crest, h, 1));
  }
  // no step: dQ/dh = A sqrt(g / (2 (h - y))) at most some 50 m2/s here
  CHECK(steepest < 60e-4);
  CHECK(steepest > 10e-4);
}

TEST_CASE("a notch of no width in a crest changes nothing to speak of") {
  const SectionPart with =
      section({{0, 1}, {0, 0.5}, {5, 0.5}, {5, 0}, {5 + 1e-7, 0}, {5 + 1e-7, 0.5}, {10, 0.5}, {10, 1}});
  const SectionPart without = section({{0, 0.5}, {10, 0.5}});
  for (const double head : {0.6, 0.8, 1.5}) {
    CHECK(crest_flow(with, head, 1) == Approx(crest_flow(without, head, 1)).epsilon(1e-6));
  }
}
