#pragma once
// Cross-sections for the tests of hydraulics: by hand, and at random but always the same.

#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "hydraulics/random_numbers.hpp"
#include "hydraulics/section.hpp"

namespace made {

using scourbook::SurveyPoint;
using scourbook::hydraulics::SectionPart;
using scourbook::hydraulics::Strip;

struct Point {
  double x, z;
};

/// The part of a bed line through `points`.
inline SectionPart section(const std::vector<Point>& points) {
  std::vector<Strip> strips;
  for (std::size_t i = 1; i < points.size(); ++i) {
    strips.push_back({points[i - 1].x, points[i - 1].z, points[i].x, points[i].z});
  }
  return SectionPart(strips);
}

/// Points of a symmetric trapezoid: bottom width, bank slope (horizontal to vertical; 0 = walls), height,
/// invert.
inline std::vector<Point> trapezoid(double bottom, double slope, double height, double invert = 0) {
  return {{0, invert + height},
          {slope * height, invert},
          {slope * height + bottom, invert},
          {2 * slope * height + bottom, invert + height}};
}

/// A river-like section: a thalweg, banks with a bend or two, roughness of the bed; 6 to 40 points.
inline std::vector<Point> natural_points(Random& random) {
  const int count = 6 + random.below(35);
  const double width = random.between(5, 80), depth = random.between(0.8, 6);
  const double thalweg = random.between(0.2, 0.8), fullness = random.between(1, 3.5);
  const double datum = random.between(-20, 900);
  std::vector<Point> points;
  for (int i = 0; i < count; ++i) {
    const double share =
        i == 0 || i == count - 1 ? double(i) / (count - 1) : (i + random.between(-0.3, 0.3)) / (count - 1);
    const double out = share < thalweg ? (thalweg - share) / thalweg : (share - thalweg) / (1 - thalweg);
    const double rough = i == 0 || i == count - 1 ? 0 : random.between(-0.04, 0.04);
    points.push_back({share * width, datum + depth * (std::pow(out, fullness) + rough)});
  }
  return points;
}

/// Anything a surveyor may write down: level beds, walls, several hollows. At least one strip has a width.
inline std::vector<Point> odd_points(Random& random) {
  std::vector<Point> points{{random.between(-50, 50), random.between(-1, 3)}};
  const int count = 2 + random.below(14);
  for (int i = 0; i < count; ++i) {
    const Point last = points.back();
    const bool wall = i > 0 && random.below(5) == 0, level = !wall && random.below(4) == 0;
    points.push_back(
        {wall ? last.x : last.x + random.between(0.05, 9), level ? last.z : random.between(-1, 3)});
  }
  return points;
}

inline std::vector<Point> moved(std::vector<Point> points, double dx, double dz) {
  for (Point& p : points) p = {p.x + dx, p.z + dz};
  return points;
}
inline std::vector<Point> scaled(std::vector<Point> points, double kx, double kz) {
  for (Point& p : points) p = {kx * p.x, kz * p.z};
  return points;
}
/// Seen from the other bank, distances still rising.
inline std::vector<Point> reversed(std::vector<Point> points) {
  std::reverse(points.begin(), points.end());
  for (Point& p : points) p.x = -p.x;
  return points;
}

inline double lowest(const std::vector<Point>& points) {
  return std::min_element(points.begin(), points.end(), [](auto a, auto b) { return a.z < b.z; })->z;
}
inline double highest(const std::vector<Point>& points) {
  return std::max_element(points.begin(), points.end(), [](auto a, auto b) { return a.z < b.z; })->z;
}

}  // namespace made
