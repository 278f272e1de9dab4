#include "hydraulics/section.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <utility>

namespace scourbook::hydraulics {
namespace {

double lower(const Strip& s) {
  return std::min(s.left_elevation_m, s.right_elevation_m);
}
double upper(const Strip& s) {
  return std::max(s.left_elevation_m, s.right_elevation_m);
}

/// Adds the wetted elements of one strip.
void add(SectionElements& sum, const Strip& s, double level) {
  const double low = lower(s), high = upper(s);
  if (!(level > low)) return;
  const double width = std::abs(s.right_distance_m - s.left_distance_m);
  const double rise = high - low;
  // sqrt, not hypot: the same bits with every library
  const double length = std::sqrt(width * width + rise * rise);
  if (level >= high) {
    sum.area_m2 += width * 0.5 * ((level - low) + (level - high));
    sum.wetted_perimeter_m += length;
    sum.top_width_m += width;
    return;
  }
  const double wet = (level - low) / rise;
  sum.area_m2 += 0.5 * width * wet * (level - low);
  sum.wetted_perimeter_m += wet * length;
  sum.top_width_m += wet * width;
}

/// True where `next` does not go on from `strip`: another part, or the outside, lies between them.
bool parted(const Strip& strip, const Strip& next) {
  return strip.right_distance_m != next.left_distance_m || strip.right_elevation_m != next.left_elevation_m;
}

}  // namespace

SectionPart::SectionPart(const std::vector<SurveyPoint>& points, const std::string& cross_section,
                         const std::string& part) {
  const SurveyPoint* last = nullptr;
  for (const SurveyPoint& point : points) {
    if (point.cross_section != cross_section) continue;
    if (last && (last->part.empty() ? "main" : last->part) == part) {
      strips_.push_back({last->distance_m, last->elevation_m, point.distance_m, point.elevation_m});
    }
    last = &point;
  }
}

SectionPart::SectionPart(std::vector<Strip> strips) : strips_(std::move(strips)) {}

double SectionPart::lowest_m() const {
  assert(!empty());
  double lowest = lower(strips_.front());
  for (const Strip& s : strips_) lowest = std::min(lowest, lower(s));
  return lowest;
}

double SectionPart::highest_m() const {
  assert(!empty());
  double highest = upper(strips_.front());
  for (const Strip& s : strips_) highest = std::max(highest, upper(s));
  return highest;
}

double SectionPart::lower_end_m() const {
  assert(!empty());
  double end = std::min(strips_.front().left_elevation_m, strips_.back().right_elevation_m);
  for (std::size_t i = 1; i < strips_.size(); ++i) {
    if (parted(strips_[i - 1], strips_[i])) {
      end = std::min({end, strips_[i - 1].right_elevation_m, strips_[i].left_elevation_m});
    }
  }
  return end;
}

std::vector<double> SectionPart::elevations_m() const {
  std::vector<double> levels;
  levels.reserve(2 * strips_.size());
  for (const Strip& s : strips_) {
    levels.push_back(s.left_elevation_m);
    levels.push_back(s.right_elevation_m);
  }
  std::sort(levels.begin(), levels.end());
  levels.erase(std::unique(levels.begin(), levels.end()), levels.end());
  return levels;
}

SectionElements SectionPart::at(double level_m) const {
  SectionElements sum;
  for (const Strip& s : strips_) add(sum, s, level_m);
  return sum;
}

SectionPart SectionPart::raised_to(double floor_m) const {
  std::vector<Strip> raised;
  raised.reserve(strips_.size() + 2);
  const auto keep = [&](const Strip& s) {
    // a wall wholly below the floor is gone
    if (s.left_distance_m != s.right_distance_m || s.left_elevation_m != s.right_elevation_m)
      raised.push_back(s);
  };
  for (const Strip& s : strips_) {
    const double left = std::max(s.left_elevation_m, floor_m), right = std::max(s.right_elevation_m, floor_m);
    if (!(lower(s) < floor_m && upper(s) > floor_m)) {
      keep({s.left_distance_m, left, s.right_distance_m, right});
      continue;
    }
    const double share = (floor_m - s.left_elevation_m) / (s.right_elevation_m - s.left_elevation_m);
    const double crossing = s.left_distance_m + share * (s.right_distance_m - s.left_distance_m);
    keep({s.left_distance_m, left, crossing, floor_m});
    keep({crossing, floor_m, s.right_distance_m, right});
  }
  return SectionPart(std::move(raised));
}

}  // namespace scourbook::hydraulics
