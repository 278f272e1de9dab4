#include "bed.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>

#include "arithmetic.hpp"

namespace scenario {
namespace {

constexpr double kSpacing = 0.2;
constexpr double kTableStep = 0.001;

/// Depths at the two ends of the wet piece of a strip, and its width; width 0 where dry.
struct WetStrip {
  double left = 0, right = 0, width = 0;
  [[nodiscard]] double area() const { return 0.5 * (left + right) * width; }
  [[nodiscard]] double bed_length() const {
    return std::sqrt(width * width + (left - right) * (left - right));
  }
};

WetStrip wet_strip(const BedPoint& a, const BedPoint& b, double level) {
  const double left = level - a.elevation_m, right = level - b.elevation_m;
  const double width = b.distance_m - a.distance_m;
  if (left >= 0 && right >= 0) return {left, right, width};
  if (left <= 0 && right <= 0) return {};
  const double deeper = std::max(left, right);
  return {std::max(left, 0.0), std::max(right, 0.0), width * deeper / std::abs(left - right)};
}

/// Correlated bed forms: each is 0.8 of its neighbour and something new.
class Forms {
 public:
  Forms(double sd, std::uint64_t seed) : sd_(sd), random_(seed) {}
  double next() {
    state_ = 0.8 * state_ + 0.6 * random_.normal();
    return sd_ * state_;
  }

 private:
  double sd_;
  Random random_;
  double state_ = 0;
};

/// Critical flow and the level upstream of it (head over the crest counted from its bed), both rising.
struct CriticalPoint {
  double level = 0;
  double flow = 0;
};

std::vector<CriticalPoint> critical_points(const Bed& crest, double coefficient, double top) {
  std::vector<CriticalPoint> points;
  const double from = lowest(crest);
  points.push_back({from, 0});
  for (int i = 1; points.back().level < top; ++i) {
    const double y = from + i * kTableStep;
    const WetSection wet = wet_section(crest, y);
    const double level = y + wet.area_m2 / (2 * wet.top_width_m);
    const double flow = coefficient * wet.area_m2 * std::sqrt(kGravity * wet.area_m2 / wet.top_width_m);
    // Where a shelf widens suddenly the head falls back for a moment: that stretch is left out.
    if (level > points.back().level && flow > points.back().flow) points.push_back({level, flow});
  }
  return points;
}

double flow_over(const std::vector<CriticalPoint>& points, double level) {
  const auto above = std::upper_bound(points.begin(), points.end(), level,
                                      [](double l, const CriticalPoint& p) { return l < p.level; });
  if (above == points.begin()) return 0;
  if (above == points.end()) return points.back().flow;
  const auto& a = *(above - 1);
  return a.flow + (above->flow - a.flow) * (level - a.level) / (above->level - a.level);
}

}  // namespace

Bed make_bed(const std::vector<BedPoint>& corners, double roughness_m, double forms_below_m,
             std::uint64_t seed) {
  Forms forms(roughness_m, seed);
  Bed bed;
  for (std::size_t i = 0; i + 1 < corners.size(); ++i) {
    const BedPoint &a = corners[i], &b = corners[i + 1];
    const int pieces = std::max(1, static_cast<int>((b.distance_m - a.distance_m) / kSpacing + 0.5));
    for (int k = 0; k < pieces; ++k) {
      const double x = static_cast<double>(k) / pieces;
      BedPoint p{a.distance_m + x * (b.distance_m - a.distance_m),
                 a.elevation_m + x * (b.elevation_m - a.elevation_m), a.floodplain};
      const double form = forms.next();
      if (k > 0 && p.elevation_m < forms_below_m) p.elevation_m += form;
      bed.push_back(p);
    }
  }
  bed.push_back(corners.back());
  return bed;
}

Bed changed(const Bed& bed, const Change& change) {
  double left = 0, right = 0;
  bool found = false;
  for (const auto& p : bed) {
    if (p.floodplain || p.elevation_m >= change.below_m) continue;
    if (!found) left = p.distance_m;
    right = p.distance_m;
    found = true;
  }
  assert(found && right > left);
  Forms forms(change.forms_m, change.seed);
  Bed result = bed;
  for (auto& p : result) {
    const double form = forms.next();
    if (p.floodplain || p.elevation_m >= change.below_m) continue;
    const double across = (p.distance_m - left) / (right - left);         // 0 to 1
    const double fade = std::min(1.0, 6 * std::min(across, 1 - across));  // nothing at the banks
    const double rise = change.rise_m * (1 + change.skew * (2 * across - 1));
    p.elevation_m = std::min(p.elevation_m + fade * (rise + form), change.below_m);
  }
  return result;
}

double lowest(const Bed& bed) {
  return std::min_element(bed.begin(), bed.end(),
                          [](const BedPoint& a, const BedPoint& b) { return a.elevation_m < b.elevation_m; })
      ->elevation_m;
}

double elevation_at(const Bed& bed, double distance_m) {
  for (std::size_t i = 0; i + 1 < bed.size(); ++i) {
    const BedPoint &a = bed[i], &b = bed[i + 1];
    if (distance_m > b.distance_m) continue;
    const double x = (distance_m - a.distance_m) / (b.distance_m - a.distance_m);
    return a.elevation_m + x * (b.elevation_m - a.elevation_m);
  }
  return bed.back().elevation_m;
}

WetSection wet_section(const Bed& bed, double level_m) {
  WetSection wet;
  for (std::size_t i = 0; i + 1 < bed.size(); ++i) {
    const WetStrip strip = wet_strip(bed[i], bed[i + 1], level_m);
    wet.area_m2 += strip.area();
    wet.top_width_m += strip.width;
  }
  return wet;
}

double conveyed_flow(const Bed& bed, const Resistance& resistance, double level_m, bool floodplain) {
  const double base_n = floodplain ? resistance.floodplain_n : resistance.main_n;
  double conveyance = 0;
  for (std::size_t i = 0; i + 1 < bed.size(); ++i) {
    if (bed[i].floodplain != floodplain) continue;
    const WetStrip strip = wet_strip(bed[i], bed[i + 1], level_m);
    if (strip.width <= 0) continue;
    const double depth = strip.area() / strip.width;
    const double n = base_n * (1 + 0.3 / (1 + depth / 0.25));
    conveyance += strip.area() * power(strip.area() / strip.bed_length(), 2.0 / 3.0) / n;
  }
  return conveyance * std::sqrt(resistance.slope);
}

TrueCurve::TrueCurve(const Bed* crest, double crest_coefficient, const Bed& channel,
                     const Resistance& resistance, double top_m) {
  std::vector<CriticalPoint> over_crest;
  from_m_ = lowest(channel);
  if (crest != nullptr) {
    over_crest = critical_points(*crest, crest_coefficient, top_m);
    from_m_ = std::max(from_m_, lowest(*crest));
  }
  const int levels = static_cast<int>((top_m - from_m_) / kTableStep) + 1;
  flows_.push_back(0);
  for (int i = 1; i < levels; ++i) {
    const double level = from_m_ + i * kTableStep;
    double flow = conveyed_flow(channel, resistance, level, false);
    if (crest != nullptr) flow = std::min(flow, flow_over(over_crest, level));
    flow += conveyed_flow(channel, resistance, level, true);
    flows_.push_back(std::max(flow, flows_.back()));
  }
}

double TrueCurve::flow(double level_m) const {
  const double at = (level_m - from_m_) / kTableStep;
  if (at <= 0) return 0;
  const double below = std::floor(at);
  const auto i = static_cast<std::size_t>(below);
  assert(i + 1 < flows_.size());
  return flows_[i] + (at - below) * (flows_[i + 1] - flows_[i]);
}

double TrueCurve::level(double flow_m3s) const {
  if (flow_m3s <= 0) return from_m_;
  assert(flow_m3s < flows_.back());
  const auto above = std::upper_bound(flows_.begin(), flows_.end(), flow_m3s);
  const auto i = static_cast<double>(above - flows_.begin()) - 1;
  const double low = *(above - 1);
  return from_m_ + kTableStep * (i + (flow_m3s - low) / (*above - low));
}

}  // namespace scenario
