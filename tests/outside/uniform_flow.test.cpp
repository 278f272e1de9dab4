// Manning's and Chezy's flow against textbook examples: tests/outside/data/uniform_flow.csv, each row with
// its source and status.

#include <cmath>
#include <map>

#include "hydraulics/area_law.hpp"
#include "hydraulics/uniform_flow.hpp"
#include "outside/published.hpp"

using namespace scourbook::hydraulics;
using published::Row;

namespace {

/// In feet the formula carries a constant, exactly (1 / 0.3048)^(1/3) = 1.48592; sources round it to 1.486
/// or 1.49. Where they did, our flow is scaled to their constant.
double rounding_of_constant(const Row& row) {
  if (row.text("length_unit") == "m") return 1;
  return row.number("manning_constant") / std::cbrt(1 / scourbook::kMetresPerFoot);
}

/// Flow in the row's own unit of volume; depth in the row's unit of length.
double flow_of(const Row& row, double depth, double slope, double n_or_c) {
  const double m = published::metres_per_unit(row);
  const SectionElements e = published::trapezoid(row).at(m * depth);
  if (row.text("law") == "chezy") {
    REQUIRE(m == 1);  // Chezy's C has a unit: no row in feet
    return chezy_flow(e, slope, n_or_c);
  }
  REQUIRE(row.text("law") == "manning");
  return rounding_of_constant(row) * manning_flow(e, slope, n_or_c) / (m * m * m);
}

double answer(const Row& row) {
  const std::string asked = row.text("asked");
  const double depth = row.number("depth", 1), slope = row.number("slope", 1),
               n_or_c = row.number("n_or_c", 1);
  if (asked == "discharge") return flow_of(row, depth, slope, n_or_c);
  const double discharge = row.number("discharge");
  if (asked == "depth") {
    return published::solve([&](double y) { return flow_of(row, y, slope, n_or_c); }, discharge, 0, 100);
  }
  // flow goes with the root of the slope, and with C
  const double ratio = discharge / flow_of(row, depth, slope, n_or_c);
  if (asked == "slope") return ratio * ratio;
  REQUIRE(asked == "chezy_c");
  return ratio;
}

}  // namespace

TEST_CASE("uniform flow, normal depth, slope and roughness of textbook examples") {
  std::map<std::string, int> asked;
  for (const Row& row : published::rows("uniform_flow.csv")) {
    published::check(row, answer(row));
    ++asked[row.text("asked")];
  }
  CHECK(asked["discharge"] == 12);
  CHECK(asked["depth"] == 7);
  CHECK(asked["slope"] == 2);
  CHECK(asked["chezy_c"] == 1);
}

TEST_CASE("a normal depth that the source only bounds") {
  // E. Maurer, Hydraulics and Water Resources: Examples Using R, chapter on open channels: 10 ft wide, banks
  // 2 on 1, 225 ft3/s, n 0.016, slope 0.0006: "a little less than 3.5 ft". Seen.
  const double m = scourbook::kMetresPerFoot;
  const SectionPart section = published::trapezoid(10 * m, 2, 10);
  const auto flow = [&](double feet) {
    return manning_flow(section.at(feet * m), 0.0006, 0.016) / (m * m * m);
  };
  const double depth = published::solve(flow, 225, 0, 20);
  CHECK(depth < 3.5);
  CHECK(depth > 3.3);
}

TEST_CASE("Chezy's C and Manning's n from a Darcy friction factor") {
  // K. Subramanya, 1000 Solved Problems in Fluid Mechanics, problem 12.4 (second hand): f 0.02, g 9.81,
  // rectangle 5 m, depth 2.3 m: C = sqrt(8 g / f) = 62.6, n = R^(1/6) / C = 0.0165. C is an input to us; n is
  // the one that gives the same flow by Manning's formula.
  const SectionElements e = published::trapezoid(5, 0, 10).at(2.3);
  const double slope = 0.001, c = 62.6;
  const double n = manning_flow(e, slope, 1) / chezy_flow(e, slope, c);
  CHECK(std::abs(n - 0.0165) <= 0.00005);
}

TEST_CASE("critical slope") {
  // K. Subramanya, 1000 Solved Problems in Fluid Mechanics, problem 12.31 (second hand): rectangle 3 m,
  // critical depth 1.2 m, n 0.014, g 9.81: slope 0.00396.
  const SectionPart section = published::trapezoid(3, 0, 10);
  const double critical = critical_flow_at_surface(section, 1.2) * std::sqrt(9.81 / scourbook::kGravity);
  const double root = critical / manning_flow(section.at(1.2), 1, 0.014);
  CHECK(std::abs(root * root - 0.00396) <= 5e-6);
}

TEST_CASE("Manning's n from its parts and the meander factor, by Cowan's method") {
  scourbook::ReachRow row;
  row.law = scourbook::FlowLaw::manning;
  row.slope = 0.0009;
  const auto effective_n = [&](double n, double meander) {
    row.roughness_n = n;
    row.meander_factor = meander;
    return std::sqrt(*row.slope) / velocity_scale(row);
  };
  // Manual de Carreteras vol. 3 (MOP 2022), table 3.707.104B, after Cowan 1956, seen: earth 0.020, minor
  // irregularity 0.005, occasional change 0.005, no obstruction, low vegetation 0.005, appreciable
  // meandering 1.150: 0.040
  CHECK(std::abs(effective_n(0.020 + 0.005 + 0.005 + 0 + 0.005, 1.150) - 0.040) <= 0.0005);
  // Arcement and Schneider 1989, USGS WSP 2339, table 4 p35, seen: (0.025 + 0.005) x 1.00 = 0.030
  CHECK(std::abs(effective_n(0.025 + 0.005, 1.00) - 0.030) <= 0.00005);
}
