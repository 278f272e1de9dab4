// The takeover of a channel from a section, out of the shape of the difference of two power laws.

#include <algorithm>
#include <cmath>

#include "rating/evaluate.hpp"

namespace scourbook::rating {
namespace {

/// ln(Q_section / Q_channel) at a level above both offsets: negative where the section governs.
double log_ratio(const ControlCoefficients& section, const ControlCoefficients& channel, double level_m) {
  return std::log(section.flow_scale / channel.flow_scale) +
         section.exponent * std::log(level_m - section.h0_m) -
         channel.exponent * std::log(level_m - channel.h0_m);
}

}  // namespace

// g(z) = ln(Q_section / Q_channel) has its only stationary point at
//   z* = (p_s h_c - p_c h_s) / (p_s - p_c),
// so it rises through zero at most once: between the higher offset and z*, or from z* up.
std::optional<double> find_takeover(const ControlCoefficients& section, const ControlCoefficients& channel,
                                    double top_m) {
  const double offset = std::max(section.h0_m, channel.h0_m);
  const double smallest = 1e-12 * std::max(1.0, std::abs(offset)) + 1e-9;  // m, least depth looked at
  double low = offset + smallest;
  double high = top_m;
  if (section.exponent != channel.exponent) {
    const double stationary = (section.exponent * channel.h0_m - channel.exponent * section.h0_m) /
                              (section.exponent - channel.exponent);
    if (stationary > low) {
      // With p_s > p_c it is the minimum of g, else its maximum.
      (section.exponent > channel.exponent ? low : high) =
          section.exponent > channel.exponent ? stationary : std::min(stationary, top_m);
    }
  }
  if (!(low < high)) return {};
  if (log_ratio(section, channel, low) >= 0 || log_ratio(section, channel, high) < 0) return {};
  for (int halving = 0; halving < 200; ++halving) {
    const double middle = low + (high - low) / 2;
    if (middle <= low || middle >= high) break;
    (log_ratio(section, channel, middle) < 0 ? low : high) = middle;
  }
  return high;
}

}  // namespace scourbook::rating
