// Elements of sections and the divided-channel method against textbook examples: section_elements.csv and
// compound_sections.csv in tests/outside/data.

#include <cmath>

#include "hydraulics/section.hpp"
#include "hydraulics/uniform_flow.hpp"
#include "outside/published.hpp"

using namespace scourbook;
using namespace scourbook::hydraulics;
using published::Row;

namespace {

/// The element asked for, in the row's own unit.
double element(const Row& row) {
  const double m = published::metres_per_unit(row);
  const SectionElements e = published::trapezoid(row).at(m * row.number("depth"));
  const std::string asked = row.text("asked");
  if (asked == "area") return e.area_m2 / (m * m);
  if (asked == "wetted_perimeter") return e.wetted_perimeter_m / m;
  if (asked == "top_width") return e.top_width_m / m;
  if (asked == "hydraulic_radius") return e.hydraulic_radius_m() / m;
  if (asked == "mean_depth") return e.area_m2 / e.top_width_m / m;
  REQUIRE(asked == "section_factor");
  return e.area_m2 * std::sqrt(e.area_m2 / e.top_width_m) / std::pow(m, 2.5);
}

/// A compound section as surveyed: points in metres, and n of the part that each strip belongs to.
struct Compound {
  std::vector<SurveyPoint> points;
  std::map<std::string, double> roughness;
};

Compound compound(const std::string& id, double metres) {
  Compound made;
  for (const Row& row : published::rows("compound_sections.csv")) {
    if (row.text("id") != id) continue;
    made.points.push_back(
        {id, row.text("part"), metres * row.number("distance"), metres * row.number("elevation"), ""});
    if (row.has("n")) made.roughness[row.text("part")] = row.number("n");
  }
  return made;
}

}  // namespace

TEST_CASE("area, wetted perimeter, width and radius of textbook examples") {
  for (const Row& row : published::rows("section_elements.csv")) published::check(row, element(row));
}

TEST_CASE("a compound section by the divided-channel method, interfaces without friction") {
  // Munson, Young, Okiishi, Fundamentals of Fluid Mechanics, example 10.7 p583 (second hand):
  // areas 1.8, 2.8, 1.8 ft2, wetted perimeters 3.6 ft each, slope 0.002, constant 1.49: 16.8 ft3/s
  const double m = kMetresPerFoot;
  const Compound section = compound("C1", m);
  REQUIRE(section.roughness.size() == 3);
  double flow = 0;
  for (const auto& [part, n] : section.roughness) {
    const SectionElements e = SectionPart(section.points, "C1", part).at(1.4 * m);
    CHECK(e.area_m2 / (m * m) == Approx(part == "main" ? 2.8 : 1.8).epsilon(1e-12));
    CHECK(e.wetted_perimeter_m / m == Approx(3.6).epsilon(1e-12));
    flow += manning_flow(e, 0.002, n) / (m * m * m);
  }
  // the source's constant against the exact one, as in uniform_flow.test.cpp
  flow *= 1.49 / std::cbrt(1 / m);
  CHECK(std::abs(flow - 16.8) <= 0.05);
}

TEST_CASE("a compound section with a berm: its parts, and the roughness of the whole") {
  // Cengel and Cimbala, Fluid Mechanics, example 13-4: areas 21 and 16 m2, perimeters 10.486 and 10 m (second
  // hand)
  const Compound section = compound("C2", 1);
  const SectionElements main = SectionPart(section.points, "C2", "main").at(5);
  const SectionElements berm = SectionPart(section.points, "C2", "right").at(5);
  CHECK(main.area_m2 == Approx(21).epsilon(1e-12));
  CHECK(std::abs(main.wetted_perimeter_m - 10.486) <= 0.001);
  CHECK(berm.area_m2 == Approx(16).epsilon(1e-12));
  CHECK(berm.wetted_perimeter_m == Approx(10).epsilon(1e-12));
  // n of the whole 0.035 (from memory): the one with which the section as one carries what its parts carry
  const double slope = 0.003;
  const double flow = manning_flow(main, slope, section.roughness.at("main")) +
                      manning_flow(berm, slope, section.roughness.at("right"));
  const SectionElements whole{main.area_m2 + berm.area_m2, main.wetted_perimeter_m + berm.wetted_perimeter_m,
                              0};
  CHECK(std::abs(manning_flow(whole, slope, 1) / flow - 0.035) <= 0.0005);
}
