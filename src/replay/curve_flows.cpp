#include "replay/curve_flows.hpp"

#include <cassert>
#include <cmath>
#include <limits>

#include "rating/evaluate.hpp"

namespace scourbook::replay {
namespace {

/// What a curve's flows are held against; infinite where the curve names no limit.
struct Limits {
  double gauged_low = 0;
  double gauged_high = 0;
  double estimate_above = 0;
  double poor_above = 0;
  double surveyed_top_m = 0;
  Flags of_curve = 0;
};

Limits limits_of(const RatingCurve& curve, const store::Settings& settings) {
  constexpr double kNone = std::numeric_limits<double>::infinity();
  Limits limits;
  limits.gauged_low = curve.gauged_low_m3s.value_or(-kNone);
  limits.gauged_high = curve.gauged_high_m3s.value_or(kNone);
  limits.estimate_above = settings.estimate_above_gauged * limits.gauged_high;
  limits.poor_above = settings.poor_above_lineage * curve.lineage_high_m3s.value_or(kNone);
  limits.surveyed_top_m = curve.surveyed_top_m;
  if (curve.inferred) limits.of_curve |= bit(Flag::inferred);
  if (curve.carried) limits.of_curve |= bit(Flag::carried);
  return limits;
}

Flags flags_of(const Limits& limits, double level_m, double discharge) {
  Flags flags = limits.of_curve;
  if (discharge < limits.gauged_low) flags |= bit(Flag::below_gauged);
  if (discharge > limits.gauged_high) flags |= bit(Flag::above_gauged);
  if (level_m > limits.surveyed_top_m) flags |= bit(Flag::above_surveyed);
  if (discharge == 0) flags |= bit(Flag::no_flow);
  return flags;
}

Quality quality_of(const Limits& limits, Flags flags, double discharge) {
  if (has(flags, Flag::above_surveyed) || discharge > limits.poor_above) return Quality::poor;
  if (has(flags, Flag::inferred) || discharge > limits.estimate_above) return Quality::estimate;
  return Quality::unchecked;
}

}  // namespace

FlowSpans FlowSpans::part(std::size_t begin, std::size_t count) const {
  return {discharge_m3s.subspan(begin, count), sd_ln_q.subspan(begin, count), flags.subspan(begin, count),
          quality.subspan(begin, count), control.subspan(begin, count)};
}

FlowColumns::FlowColumns(std::size_t count)
    : discharge_m3s(count, std::numeric_limits<double>::quiet_NaN()),
      sd_ln_q(count, 0.0),
      flags(count, bit(Flag::gap)),
      quality(count, Quality::missing),
      control(count, std::int8_t{-1}) {}

FlowSpans FlowColumns::spans() {
  return {discharge_m3s, sd_ln_q, flags, quality, control};
}

void curve_flows(const RatingCurve& curve, const store::Settings& settings, std::span<const double> level_m,
                 const FlowSpans& out) {
  assert(out.discharge_m3s.size() == level_m.size());
  const Limits limits = limits_of(curve, settings);
  for (std::size_t i = 0; i < level_m.size(); ++i) {
    if (std::isnan(level_m[i])) continue;
    const rating::Flow flow = rating::evaluate(curve, level_m[i]);
    out.discharge_m3s[i] = flow.discharge_m3s;
    out.control[i] = static_cast<std::int8_t>(flow.control);
  }
  for (std::size_t i = 0; i < level_m.size(); ++i) {
    const double discharge = out.discharge_m3s[i];
    if (std::isnan(discharge)) continue;
    out.sd_ln_q[i] = discharge > 0 ? rating::sd_ln_q(curve, level_m[i]) : 0;
    out.flags[i] = flags_of(limits, level_m[i], discharge);
    out.quality[i] = quality_of(limits, out.flags[i], discharge);
  }
}

void blend_flows(std::span<const double> weight, const FlowSpans& outgoing, const FlowSpans& flows) {
  for (std::size_t i = 0; i < weight.size(); ++i) {
    if (std::isnan(flows.discharge_m3s[i])) continue;
    const double x = weight[i];
    const double out = (1 - x) * outgoing.discharge_m3s[i];
    const double in = x * flows.discharge_m3s[i];
    const double discharge = out + in;
    const double spread = out * outgoing.sd_ln_q[i] + in * flows.sd_ln_q[i];
    flows.discharge_m3s[i] = discharge;
    flows.sd_ln_q[i] = discharge > 0 ? spread / discharge : 0;
    // No flow is said of the blend, not of one of its curves.
    Flags flags = (flows.flags[i] | outgoing.flags[i] | bit(Flag::blended)) & ~bit(Flag::no_flow);
    if (discharge == 0) flags |= bit(Flag::no_flow);
    flows.flags[i] = flags;
    flows.quality[i] = worse(Quality::estimate, worse(flows.quality[i], outgoing.quality[i]));
  }
}

}  // namespace scourbook::replay
