// Geometry of a section by hand, and which strips belong to which part.

#include "hydraulics/section.hpp"

#include "hydraulics/sections.hpp"

using namespace scourbook;
using namespace scourbook::hydraulics;
using made::section;
using made::trapezoid;

namespace {

void check(const SectionElements& e, double area, double perimeter, double width) {
  CHECK(e.area_m2 == Approx(area).epsilon(1e-14).margin(1e-14));
  CHECK(e.wetted_perimeter_m == Approx(perimeter).epsilon(1e-14).margin(1e-14));
  CHECK(e.top_width_m == Approx(width).epsilon(1e-14).margin(1e-14));
}

SurveyPoint point(const std::string& cross_section, const std::string& part, double x, double z) {
  return {cross_section, part, x, z, ""};
}

/// A main channel between two berms, beside another cross-section of the same survey.
std::vector<SurveyPoint> compound() {
  return {point("A", "left", 0, 5),   point("A", "left", 0, 3),   point("A", "main", 10, 3),
          point("B", "main", 0, 9),   point("A", "main", 12, 0),  point("A", "main", 16, 0),
          point("A", "right", 18, 4), point("A", "right", 30, 4), point("A", "right", 30, 6)};
}

}  // namespace

TEST_CASE("a triangle of 1 on 2 banks") {
  const SectionPart part = section(trapezoid(0, 2, 3, 100));
  const double bank = std::sqrt(5.0);
  check(part.at(101), 2, 2 * bank, 4);
  check(part.at(101.5), 4.5, 3 * bank, 6);
  check(part.at(103), 18, 6 * bank, 12);
  // above the ends: walls without friction
  check(part.at(104), 18 + 12, 6 * bank, 12);
  check(part.at(100), 0, 0, 0);
  check(part.at(99), 0, 0, 0);
  CHECK(part.at(101).hydraulic_radius_m() == Approx(1 / bank));
  CHECK(part.at(99).hydraulic_radius_m() == 0);
}

TEST_CASE("a trapezoid, its bank slope only above the level bottom") {
  const SectionPart part = section(trapezoid(3, 0.5, 4));
  check(part.at(2), 8, 3 + 4 * std::sqrt(1.25), 5);
  // a bed that is level with the water is dry
  check(part.at(0), 0, 0, 0);
  check(part.at(1e-9), 3e-9 + 0.5e-18, 3 + 2e-9 * std::sqrt(1.25), 3 + 1e-9);
}

TEST_CASE("walls between points of the part are bed, those above its ends are not") {
  const SectionPart walled = section({{0, 2}, {0, 0}, {4, 0}, {4, 2}});
  check(walled.at(1.5), 6, 7, 4);
  check(walled.at(3), 12, 8, 4);
  const SectionPart open = section({{0, 0}, {4, 0}});
  check(open.at(1.5), 6, 4, 4);
  // a step in the bed: wet only as high as the water stands
  const SectionPart step = section({{0, 0}, {4, 0}, {4, 1}, {6, 1}});
  check(step.at(0.75), 3, 4.75, 4);
  check(step.at(1), 4, 5, 4);
  check(step.at(2), 10, 7, 6);
}

TEST_CASE("two hollows fill side by side") {
  const SectionPart part = section({{0, 2}, {2, 0}, {4, 2}, {6, 1}, {8, 3}});
  const double left = 2 * std::sqrt(2.0);
  check(part.at(1), 1, left, 2);
  check(part.at(1.5), 2.25 + 0.375, 1.5 * left + 0.5 * std::sqrt(5.0) + 0.5 * std::sqrt(2.0), 3 + 1.5);
}

TEST_CASE("a strip belongs to the part of its first point; other cross-sections do not come between") {
  const SectionPart main(compound(), "A", "main");
  REQUIRE(main.strips().size() == 3);
  check(main.at(3), 0.5 * 2 * 3 + 4 * 3 + 0.5 * 3 * 1.5, std::sqrt(13.0) + 4 + std::sqrt(11.25), 7.5);
  const SectionPart left(compound(), "A", "left");
  REQUIRE(left.strips().size() == 2);
  check(left.at(4), 10, 11, 10);
  const SectionPart right(compound(), "A", "right");
  check(right.at(5), 12, 13, 12);
  CHECK(SectionPart(compound(), "A", "island").empty());
  CHECK(SectionPart(compound(), "C", "main").empty());
  CHECK(SectionPart(compound(), "B", "main").empty());  // one point makes no strip
  CHECK(SectionPart({}, "A", "main").at(3).area_m2 == 0);
}

TEST_CASE("a blank part is the main part") {
  std::vector<SurveyPoint> points = compound();
  for (SurveyPoint& p : points) {
    if (p.part == "main") p.part = "";
  }
  CHECK(SectionPart(points, "A", "main").strips().size() == 3);
  CHECK(SectionPart(points, "A", "").empty());
}

TEST_CASE("lowest, highest, and the lower end") {
  const SectionPart main(compound(), "A", "main");
  CHECK(main.lowest_m() == 0);
  CHECK(main.highest_m() == 4);
  CHECK(main.lower_end_m() == 3);
  const SectionPart right(compound(), "A", "right");
  CHECK(right.lower_end_m() == 4);
  CHECK(right.lowest_m() == 4);
  CHECK(right.highest_m() == 6);
}

TEST_CASE("an island of another part: water leaves the main part at the island's edge") {
  const std::vector<SurveyPoint> points{point("A", "main", 0, 6),     point("A", "main", 5, 0),
                                        point("A", "island", 9, 2.5), point("A", "main", 20, 3),
                                        point("A", "main", 25, 1),    point("A", "main", 30, 7)};
  const SectionPart main(points, "A", "main");
  CHECK(main.strips().size() == 4);
  CHECK(main.lower_end_m() == 2.5);
  check(main.at(6), 15 + 0.5 * (6 + 3.5) * 4 + 0.5 * (3 + 5) * 5 + 0.5 * 5 * (25.0 / 6),
        std::sqrt(61.0) + std::sqrt(16 + 6.25) + std::sqrt(29.0) + 5.0 / 6 * std::sqrt(61.0),
        5 + 4 + 5 + 25.0 / 6);
}

TEST_CASE("an island with edges of one elevation, and a wall that is another part") {
  const std::vector<SurveyPoint> island{point("A", "main", 0, 6),     point("A", "main", 5, 0),
                                        point("A", "island", 9, 2.5), point("A", "main", 20, 2.5),
                                        point("A", "main", 25, 1),    point("A", "main", 30, 7)};
  CHECK(SectionPart(island, "A", "main").lower_end_m() == 2.5);
  const std::vector<SurveyPoint> wall{point("A", "main", 0, 6), point("A", "wall", 5, 1),
                                      point("A", "main", 5, 3), point("A", "main", 9, 7)};
  CHECK(SectionPart(wall, "A", "main").lower_end_m() == 1);
}

TEST_CASE("elevations are distinct and rise") {
  CHECK(section({{0, 2}, {2, 0}, {4, 2}, {6, 1}, {8, 3}}).elevations_m() == std::vector<double>{0, 1, 2, 3});
  CHECK(SectionPart(std::vector<Strip>{}).elevations_m().empty());
}

TEST_CASE("raised to a floor: strips that cross it are split, what lies below becomes level bed") {
  const SectionPart part = section({{0, 3}, {2, 1}, {4, 1}, {8, 3}}).raised_to(2);
  CHECK(part.lowest_m() == 2);
  CHECK(part.highest_m() == 3);
  check(part.at(2), 0, 0, 0);
  // level bed from 1 to 6, then both banks
  check(part.at(3), 8 * 1 - 0.5 * 1 - 0.5 * 2, 5 + std::sqrt(2.0) + std::sqrt(5.0), 8);
  check(part.at(2.5), 5 * 0.5 + 0.5 * 0.5 * 1.5, 5 + 0.5 * (std::sqrt(2.0) + std::sqrt(5.0)), 6.5);
}

TEST_CASE("raised to a floor: walls, and floors outside the bed") {
  const std::vector<made::Point> walls{{0, 3}, {0, 0}, {5, 0}, {5, 1}, {9, 1}, {9, 4}};
  const SectionPart raised = section(walls).raised_to(1.5);
  check(raised.at(2), 4.5, 9 + 0.5 + 0.5, 9);
  CHECK(raised.lower_end_m() == 3);
  // nothing to raise
  const SectionPart same = section(walls).raised_to(-1);
  CHECK(same.strips().size() == 5);
  CHECK(same.at(2.2).area_m2 == section(walls).at(2.2).area_m2);
  // all of it
  const SectionPart flat = section(walls).raised_to(10);
  check(flat.at(11), 9, 9, 9);
  CHECK(flat.lower_end_m() == 10);
  CHECK(SectionPart(std::vector<Strip>{}).raised_to(1).empty());
}
