// Velocity scale and section coefficient of each flow law.

#include <cmath>

#include "hydraulics/area_law.hpp"
#include "hydraulics/sections.hpp"
#include "hydraulics/uniform_flow.hpp"

using namespace scourbook;
using namespace scourbook::hydraulics;
using made::Point;
using made::Random;
using made::section;
using made::trapezoid;

namespace {

ReachRow row_of(FlowLaw law) {
  ReachRow row;
  row.law = law;
  row.slope = 0.0004;
  row.roughness_n = 0.032;
  row.chezy_c = 45;
  row.coefficient = 0.93;
  return row;
}

}  // namespace

TEST_CASE("velocity exponent and velocity scale of the flow laws") {
  CHECK(velocity_exponent(FlowLaw::manning) == 2.0 / 3.0);
  CHECK(velocity_exponent(FlowLaw::chezy) == 0.5);
  CHECK(velocity_exponent(FlowLaw::critical) == 0.5);
  ReachRow manning = row_of(FlowLaw::manning), chezy = row_of(FlowLaw::chezy),
           crest = row_of(FlowLaw::critical);
  CHECK(velocity_scale(manning) == Approx(0.02 / 0.032).epsilon(1e-15));
  CHECK(velocity_scale(chezy) == Approx(0.9).epsilon(1e-15));
  CHECK(velocity_scale(crest) == 0.93);
  // meandering slows the flow as a larger roughness does; a crest knows none
  for (ReachRow* row : {&manning, &chezy, &crest}) row->meander_factor = 1.15;
  CHECK(velocity_scale(manning) == Approx(0.02 / (0.032 * 1.15)).epsilon(1e-15));
  CHECK(velocity_scale(chezy) == Approx(0.9 / 1.15).epsilon(1e-15));
  CHECK(velocity_scale(crest) == 0.93);
}

TEST_CASE("f is the mean of ln(area R^b) against the depth's power, by its definition") {
  Random random(31);
  for (int i = 0; i < 60; ++i) {
    const SectionPart part = section(made::natural_points(random));
    const LevelRange range{part.lowest_m(), part.lower_end_m()};
    const AreaLaw law = fit_area_law_free_offset(part, range).law;
    for (const FlowLaw flow_law : {FlowLaw::manning, FlowLaw::chezy}) {
      const double b = flow_law == FlowLaw::manning ? 2.0 / 3 : 0.5;
      double sum = 0;
      for (int j = 0; j < 80; ++j) {
        const double z = range.from_m + (range.to_m - range.from_m) * (0.05 + 0.95 * j / 79);
        const SectionElements e = part.at(z);
        sum += std::log(e.area_m2 * std::pow(e.area_m2 / e.wetted_perimeter_m, b)) -
               (b + law.c) * std::log(z - law.h0_m);
      }
      CHECK(section_coefficient(part, law, range, flow_law) == Approx(std::exp(sum / 80)).epsilon(1e-11));
    }
  }
}

TEST_CASE("dry levels take no part in f") {
  // from 1 m below a level bed: the law is that of the levels above the bed, and so is f
  const SectionPart bed = section({{0, 0}, {7, 0}});
  const LevelRange range{-1, 3};
  const AreaLaw law = fit_area_law(bed, range).law;
  double sum = 0;
  int wet = 0;
  for (const double z : law_levels(range)) {
    if (z <= 0) continue;
    sum += std::log(7 * std::pow(z, 5.0 / 3)) - (2.0 / 3 + law.c) * std::log(z + 1);
    ++wet;
  }
  REQUIRE(wet == 63);
  CHECK(section_coefficient(bed, law, range, FlowLaw::manning) == Approx(std::exp(sum / wet)).epsilon(1e-12));
}

TEST_CASE("f of a wide power-law section tends to w c^-b") {
  // R -> area / width = d / c as the banks flatten; the error falls with the square of the width
  const auto gap = [](double bank_slope, FlowLaw flow_law) {
    const SectionPart part = section(trapezoid(0, bank_slope, 3));
    const AreaLaw law = fit_area_law(part, {0, 3}).law;
    const double limit = law.w * std::pow(law.c, -velocity_exponent(flow_law));
    return section_coefficient(part, law, {0, 3}, flow_law) / limit - 1;
  };
  for (const FlowLaw law : {FlowLaw::manning, FlowLaw::chezy}) {
    CHECK(std::abs(gap(1000, law)) < 1e-6);
    CHECK(gap(10, law) / gap(100, law) == Approx(100).epsilon(0.01));
    CHECK(gap(10, law) < 0);
  }
  // a level bed between frictionless walls: R = d at any width
  const SectionPart bed = section({{0, 0}, {7, 0}});
  const AreaLaw law = fit_area_law(bed, {0, 2}).law;
  CHECK(section_coefficient(bed, law, {0, 2}, FlowLaw::manning) == Approx(7).epsilon(1e-12));
}

TEST_CASE("v1 f d^(b+c) is the flow of the section where it is a power law") {
  const double slope = 0.0009, n = 0.03, c_chezy = 50;
  const SectionPart triangle = section(trapezoid(0, 2.5, 3));
  const AreaLaw law = fit_area_law(triangle, {0, 3}).law;
  for (const double d : {0.2, 1.0, 2.9}) {
    const SectionElements e = triangle.at(d);
    const double f_manning = section_coefficient(triangle, law, {0, 3}, FlowLaw::manning);
    CHECK(std::sqrt(slope) / n * f_manning * std::pow(d, 2 + 2.0 / 3) ==
          Approx(manning_flow(e, slope, n)).epsilon(1e-11));
    const double f_chezy = section_coefficient(triangle, law, {0, 3}, FlowLaw::chezy);
    CHECK(c_chezy * std::sqrt(slope) * f_chezy * std::pow(d, 2.5) ==
          Approx(chezy_flow(e, slope, c_chezy)).epsilon(1e-11));
  }
}

TEST_CASE(
    "critical coefficients: (2/3)^1.5 root g a metre of a rectangle, (4/5)^2.5 root(g/2) tan(theta/2) of a "
    "triangle") {
  const SectionPart rectangle = section(trapezoid(6, 0, 2));
  const AreaLaw wide = fit_area_law(rectangle, {0, 2}).law;
  const double f_rectangle = section_coefficient(rectangle, wide, {0, 2}, FlowLaw::critical);
  CHECK(f_rectangle / 6 == Approx(std::pow(2.0 / 3, 1.5) * std::sqrt(9.80665)).epsilon(1e-11));
  CHECK(f_rectangle / 6 == Approx(1.705).margin(0.0005));
  const SectionPart triangle = section(trapezoid(0, 0.75, 2));
  const AreaLaw sharp = fit_area_law(triangle, {0, 2}).law;
  const double f_triangle = section_coefficient(triangle, sharp, {0, 2}, FlowLaw::critical);
  CHECK(f_triangle / 0.75 == Approx(std::pow(0.8, 2.5) * std::sqrt(9.80665 / 2)).epsilon(1e-11));
  CHECK(f_triangle / 0.75 == Approx(1.268).margin(0.0005));
}

TEST_CASE("the critical law is the exact flow over a crest of power-law shape") {
  // half width 3 z^(1/2): a parabola, by short chords
  std::vector<Point> points;
  for (int i = -3000; i <= 3000; ++i) {
    const double share = i / 3000.0;
    points.push_back({3 * share * std::abs(share), share * share * share * share});
  }
  const SectionPart crest = section(points);
  const LevelRange range{0, 1};
  const AreaLaw law = fit_area_law(crest, range).law;
  CHECK(law.c == Approx(1.5).epsilon(1e-6));
  const double f = section_coefficient(crest, law, range, FlowLaw::critical);
  for (const double head : {0.1, 0.4, 0.9}) {
    CHECK(f * head * head == Approx(crest_flow(crest, head, 1)).epsilon(1e-5));
  }
}
