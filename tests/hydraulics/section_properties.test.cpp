// What holds of every section, and the elements against independent methods: clipping the water's polygon,
// and summing over thin slices.

#include <array>

#include "hydraulics/section.hpp"
#include "hydraulics/sections.hpp"

using namespace scourbook::hydraulics;
using made::Point;
using made::Random;
using made::section;

namespace {

constexpr double kSame = 1e-13;

/// Area between the bed and `level` by clipping: the polygon bed + a lid high above, cut by z <= level
/// (Sutherland and Hodgman 1974), measured by the shoelace formula.
double clipped_area(const std::vector<Point>& bed, double level) {
  std::vector<Point> outline = bed;
  const double lid = std::max(made::highest(bed), level) + 1;
  outline.push_back({bed.back().x, lid});
  outline.push_back({bed.front().x, lid});
  std::vector<Point> water;
  for (std::size_t i = 0; i < outline.size(); ++i) {
    const Point a = outline[i], b = outline[(i + 1) % outline.size()];
    if (a.z <= level) water.push_back(a);
    if ((a.z <= level) != (b.z <= level)) {
      water.push_back({a.x + (b.x - a.x) * (level - a.z) / (b.z - a.z), level});
    }
  }
  double twice = 0;
  for (std::size_t i = 0; i < water.size(); ++i) {
    const Point a = water[i], b = water[(i + 1) % water.size()];
    // about a corner of the water, so that large elevations do not cancel
    twice += (a.x - water[0].x) * (b.z - water[0].z) - (b.x - water[0].x) * (a.z - water[0].z);
  }
  return std::abs(twice) / 2;
}

/// Elements by cutting every strip into many equal pieces, each wet or dry as its middle is.
SectionElements sliced(const std::vector<Point>& bed, double level) {
  constexpr int kPieces = 4000;
  SectionElements sum;
  for (std::size_t i = 1; i < bed.size(); ++i) {
    const double dx = (bed[i].x - bed[i - 1].x) / kPieces, dz = (bed[i].z - bed[i - 1].z) / kPieces;
    for (int j = 0; j < kPieces; ++j) {
      const double z = bed[i - 1].z + dz * (j + 0.5);
      if (z >= level) continue;
      sum.area_m2 += (level - z) * dx;
      sum.wetted_perimeter_m += std::hypot(dx, dz);
      sum.top_width_m += dx;
    }
  }
  return sum;
}

/// Sizes of the whole section, the scale of its errors.
SectionElements whole(const std::vector<Point>& bed) {
  return section(bed).at(made::highest(bed) + 1);
}

/// `of_lengths` for wetted perimeter and width: on a nearly level strip, rounding of elevations moves them
/// far more than the area.
void check_same(const SectionElements& a, const SectionElements& b, const SectionElements& scale,
                double tolerance, double of_lengths) {
  CHECK(std::abs(a.area_m2 - b.area_m2) <= tolerance * scale.area_m2);
  CHECK(std::abs(a.wetted_perimeter_m - b.wetted_perimeter_m) <= of_lengths * scale.wetted_perimeter_m);
  CHECK(std::abs(a.top_width_m - b.top_width_m) <= of_lengths * scale.top_width_m);
}
void check_same(const SectionElements& a, const SectionElements& b, const SectionElements& scale,
                double tolerance) {
  check_same(a, b, scale, tolerance, tolerance);
}

/// From below the bed to above it, not at the lowest point itself: perimeter and width jump at a level bed,
/// and rounding would decide on which side a level falls.
std::vector<double> levels_over(const std::vector<Point>& bed, int count) {
  const double low = made::lowest(bed) - 0.09876, high = made::highest(bed) + 0.5;
  std::vector<double> levels;
  for (int i = 0; i <= count; ++i) levels.push_back(low + (high - low) * i / count);
  return levels;
}

/// Calls `test` with river-like sections and with odd ones.
template <class Test>
void for_sections(std::uint64_t seed, int count, Test test) {
  Random random(seed);
  for (int i = 0; i < count; ++i) {
    CAPTURE(i);
    test(i % 2 ? made::natural_points(random) : made::odd_points(random), random);
  }
}

}  // namespace

TEST_CASE("area by clipping the water's polygon") {
  for_sections(1, 200, [](const auto& bed, Random&) {
    const SectionPart part = section(bed);
    const double scale = whole(bed).area_m2;
    for (const double level : levels_over(bed, 40)) {
      CHECK(std::abs(part.at(level).area_m2 - clipped_area(bed, level)) <= 2e-13 * scale);
    }
  });
}

TEST_CASE("area, wetted perimeter and width by thin slices") {
  for_sections(2, 40, [](const auto& bed, Random&) {
    for (const double level : levels_over(bed, 7)) {
      check_same(section(bed).at(level), sliced(bed, level), whole(bed), 4e-4);
    }
  });
}

TEST_CASE("area is the integral of the top width") {
  for_sections(3, 100, [](const auto& bed, Random&) {
    const SectionPart part = section(bed);
    const std::vector<double> levels = part.elevations_m();
    const double scale = whole(bed).area_m2;
    double area = 0;
    // Between bed points the width is a straight line, so that its middle value integrates exactly.
    for (std::size_t i = 1; i < levels.size(); ++i) {
      area += part.at(0.5 * (levels[i - 1] + levels[i])).top_width_m * (levels[i] - levels[i - 1]);
      CHECK(std::abs(part.at(levels[i]).area_m2 - area) <= kSame * scale);
    }
  });
}

TEST_CASE("no element falls as the level rises; the wetted perimeter is at least the top width") {
  for_sections(4, 100, [](const auto& bed, Random&) {
    const SectionPart part = section(bed);
    SectionElements below;
    for (const double level : levels_over(bed, 300)) {
      const SectionElements e = part.at(level);
      CHECK(e.area_m2 >= below.area_m2);
      CHECK(e.wetted_perimeter_m >= below.wetted_perimeter_m);
      CHECK(e.top_width_m >= below.top_width_m);
      CHECK(e.wetted_perimeter_m >= e.top_width_m * (1 - kSame));
      below = e;
    }
  });
}

TEST_CASE("place, datum, and the bank one looks from do not matter") {
  for_sections(5, 100, [](const auto& bed, Random& random) {
    const SectionPart part = section(bed), other_bank = section(made::reversed(bed));
    const double dx = random.between(-500, 500), dz = random.between(-800, 800);
    const SectionPart elsewhere = section(made::moved(bed, dx, dz));
    for (const double level : levels_over(bed, 30)) {
      check_same(other_bank.at(level), part.at(level), whole(bed), kSame);
      // moving rounds the points themselves, by up to 1e-13 m
      check_same(elsewhere.at(level + dz), part.at(level), whole(bed), 3e-12, 1e-9);
    }
  });
}

TEST_CASE("distances that fall give the same as distances that rise") {
  for_sections(6, 50, [](const auto& bed, Random&) {
    std::vector<Point> falling = bed;
    for (Point& p : falling) p.x = -p.x;
    for (const double level : levels_over(bed, 30)) {
      check_same(section(falling).at(level), section(bed).at(level), whole(bed), kSame);
    }
  });
}

TEST_CASE("feet for metres: lengths scale once, areas twice") {
  constexpr double kFoot = 0.3048;
  for_sections(7, 100, [](const auto& bed, Random&) {
    const SectionPart feet = section(made::scaled(bed, 1 / kFoot, 1 / kFoot));
    for (const double level : levels_over(bed, 30)) {
      const SectionElements e = feet.at(level / kFoot);
      check_same({e.area_m2 * kFoot * kFoot, e.wetted_perimeter_m * kFoot, e.top_width_m * kFoot},
                 section(bed).at(level), whole(bed), 2e-13, 1e-9);
    }
  });
}

TEST_CASE("a point more on a straight bed changes nothing") {
  for_sections(8, 60, [](const auto& bed, Random& random) {
    std::vector<Point> more;
    for (std::size_t i = 0; i < bed.size(); ++i) {
      if (i > 0) {
        const double share = random.between(0, 1);
        more.push_back({bed[i - 1].x + share * (bed[i].x - bed[i - 1].x),
                        bed[i - 1].z + share * (bed[i].z - bed[i - 1].z)});
      }
      more.push_back(bed[i]);
    }
    for (const double level : levels_over(bed, 30)) {
      check_same(section(more).at(level), section(bed).at(level), whole(bed), 2e-13, 1e-9);
    }
  });
}

TEST_CASE("parts add up to the whole: interfaces carry neither area nor perimeter") {
  for_sections(9, 60, [](const auto& bed, Random& random) {
    std::vector<scourbook::SurveyPoint> points;
    const std::array<std::string, 3> names{"main", "left", "right"};
    for (const Point& p : bed) points.push_back({"A", names.at(random.below(3)), p.x, p.z, ""});
    for (const double level : levels_over(bed, 30)) {
      SectionElements sum;
      for (const std::string& name : names) {
        const SectionElements e = SectionPart(points, "A", name).at(level);
        sum.area_m2 += e.area_m2;
        sum.wetted_perimeter_m += e.wetted_perimeter_m;
        sum.top_width_m += e.top_width_m;
      }
      check_same(sum, section(bed).at(level), whole(bed), kSame);
    }
  });
}

TEST_CASE("raising the bed takes away what lay below, and leaves its width as bed") {
  for_sections(10, 100, [](const auto& bed, Random& random) {
    const SectionPart part = section(bed);
    const double low = made::lowest(bed), high = made::highest(bed);
    const double floor = random.between(low, high);
    const SectionPart raised = part.raised_to(floor);
    const SectionElements below = part.at(floor);
    CHECK(raised.lowest_m() >= floor);
    for (const double level : levels_over(bed, 30)) {
      SectionElements wanted;
      if (level > floor) {
        wanted = part.at(level);
        wanted.area_m2 -= below.area_m2;
        wanted.wetted_perimeter_m += below.top_width_m - below.wetted_perimeter_m;
      }
      check_same(raised.at(level), wanted, whole(bed), 3e-13);
    }
  });
}
