#include "hydraulics/uniform_flow.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "hydraulics/power.hpp"

namespace scourbook::hydraulics {
namespace {

/// Part of the section between two neighbouring elevations of bed points, in s = y - from:
/// area = area + width s + growth s^2 / 2, width = width + growth s.
struct Layer {
  double from, thickness;
  double area, width, growth;
};

/// The layer's width just above `from` may exceed the width at it (a level bed); so it is taken from inside.
Layer layer_of(const SectionPart& part, double from, double to) {
  Layer layer{from, to - from, part.at(from).area_m2, 0, 0};
  if (!std::isfinite(to)) {
    layer.width = part.at(from + 1).top_width_m;
    return layer;
  }
  const double middle = part.at(from + 0.5 * (to - from)).top_width_m;
  const double top = part.at(to).top_width_m;
  layer.width = std::max(2 * middle - top, 0.0);
  layer.growth = std::max((top - layer.width) / layer.thickness, 0.0);
  return layer;
}

/// Height in the layer at which A^2 (head - y) has its maximum, or a negative number where it has none
/// inside. There 2 T (head - y) = A; 2 T (head - y) - A is concave in the layer and falls through zero at a
/// maximum.
double height_of_maximum(const Layer& layer, double head) {
  const double over = head - layer.from;
  const double square = -2.5 * layer.growth;
  const double linear = 2 * layer.growth * over - 3 * layer.width;
  const double constant = 2 * layer.width * over - layer.area;
  const double discriminant = linear * linear - 4 * square * constant;
  if (discriminant < 0) return -1;
  const double root = std::sqrt(discriminant);
  // the larger of the two zeros, each form where it does not cancel
  if (linear > 0) return (linear + root) / (-2 * square);
  return root - linear > 0 ? 2 * constant / (root - linear) : -1;
}

}  // namespace

double manning_flow(const SectionElements& e, double slope, double roughness_n) {
  return e.area_m2 * reproducible_pow(e.hydraulic_radius_m(), 2.0 / 3.0) * std::sqrt(slope) / roughness_n;
}

double chezy_flow(const SectionElements& e, double slope, double chezy_c) {
  return chezy_c * e.area_m2 * std::sqrt(e.hydraulic_radius_m() * slope);
}

double critical_flow_at_surface(const SectionPart& crest, double level_m) {
  const SectionElements e = crest.at(level_m);
  if (!(e.top_width_m > 0)) return 0;
  return e.area_m2 * std::sqrt(kGravity * e.area_m2 / e.top_width_m);
}

double crest_flow(const SectionPart& crest, double head_level_m, double discharge_coefficient) {
  const std::vector<double> levels = crest.elevations_m();
  double greatest = 0;
  const auto offer = [&](double level) {
    const double flow = crest.at(level).area_m2 * std::sqrt(2 * kGravity * (head_level_m - level));
    greatest = std::max(greatest, flow);
  };
  for (std::size_t i = 0; i < levels.size() && levels[i] < head_level_m; ++i) {
    // Rounding may push a maximum at the joint of two layers out of both; the joint itself covers that.
    offer(levels[i]);
    const bool last = i + 1 == levels.size();
    const Layer layer =
        layer_of(crest, levels[i], last ? std::numeric_limits<double>::infinity() : levels[i + 1]);
    const double height = height_of_maximum(layer, head_level_m);
    if (height > 0 && height <= layer.thickness && layer.from + height < head_level_m) {
      offer(layer.from + height);
    }
  }
  return discharge_coefficient * greatest;
}

}  // namespace scourbook::hydraulics
