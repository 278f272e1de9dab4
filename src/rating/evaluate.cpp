#include "rating/evaluate.hpp"

#include <algorithm>
#include <cassert>
#include <limits>

#include "hydraulics/power.hpp"

namespace scourbook::rating {
namespace {

constexpr int kNone = -1;

/// Indices of the two controls of which one governs.
struct MainControls {
  int section = kNone;
  int channel = kNone;
};

MainControls main_controls(const RatingCurve& curve) {
  MainControls found;
  for (int i = 0; i < static_cast<int>(curve.controls.size()); ++i) {
    if (curve.controls[i].kind == ControlKind::section) found.section = i;
    if (curve.controls[i].kind == ControlKind::channel) found.channel = i;
  }
  return found;
}

/// The governing control and its flow; index kNone where the curve has neither section nor channel.
Flow governing_flow(const RatingCurve& curve, double level_m) {
  const MainControls mains = main_controls(curve);
  if (mains.section == kNone && mains.channel == kNone) return {};
  const bool above_takeover = curve.takeover_level_m && level_m >= *curve.takeover_level_m;
  if (mains.section == kNone || (mains.channel != kNone && above_takeover)) {
    return {control_flow(curve.controls[mains.channel], level_m), mains.channel};
  }
  const double section = control_flow(curve.controls[mains.section], level_m);
  if (mains.channel == kNone) return {section, mains.section};
  const double channel = control_flow(curve.controls[mains.channel], level_m);
  return channel < section ? Flow{channel, mains.channel} : Flow{section, mains.section};
}

}  // namespace

double control_flow(const ControlCoefficients& control, double level_m) {
  const double depth = level_m - control.h0_m;
  if (!(depth > 0)) return 0;
  return control.flow_scale * hydraulics::reproducible_pow(depth, control.exponent);
}

Flow evaluate(const RatingCurve& curve, double level_m) {
  Flow flow = governing_flow(curve, level_m);
  if (flow.discharge_m3s == 0) flow.control = kNone;
  const bool governed = flow.control != kNone;
  for (int i = 0; i < static_cast<int>(curve.controls.size()); ++i) {
    const ControlCoefficients& control = curve.controls[i];
    if (control.kind != ControlKind::overbank) continue;
    const double added = control_flow(control, level_m);
    flow.discharge_m3s += added;
    if (governed || added == 0) continue;
    if (flow.control == kNone || control.h0_m > curve.controls[flow.control].h0_m) flow.control = i;
  }
  return flow;
}

double log_slope(const RatingCurve& curve, double level_m) {
  const Flow main = governing_flow(curve, level_m);
  double flow = main.discharge_m3s;
  double slope = 0;  // dQ/dz
  if (main.discharge_m3s > 0) {
    const ControlCoefficients& control = curve.controls[main.control];
    slope += main.discharge_m3s * control.exponent / (level_m - control.h0_m);
  }
  for (const ControlCoefficients& control : curve.controls) {
    if (control.kind != ControlKind::overbank) continue;
    const double added = control_flow(control, level_m);
    if (added == 0) continue;
    flow += added;
    slope += added * control.exponent / (level_m - control.h0_m);
  }
  return flow > 0 ? slope / flow : 0;
}

double sd_ln_q(const RatingCurve& curve, double level_m) {
  const auto& bands = curve.bands;
  assert(!bands.empty());
  const auto above = std::upper_bound(bands.begin(), bands.end(), level_m,
                                      [](double level, const BandPoint& p) { return level < p.level_m; });
  if (above == bands.begin()) return bands.front().sd_ln_q;
  if (above == bands.end()) return bands.back().sd_ln_q;
  const BandPoint& low = *(above - 1);
  const double share = (level_m - low.level_m) / (above->level_m - low.level_m);
  return low.sd_ln_q + share * (above->sd_ln_q - low.sd_ln_q);
}

double u95_pct(double sd) {
  return 100 * (hydraulics::reproducible_exp(1.96 * sd) - 1);
}

double cease_to_flow_m(const RatingCurve& curve) {
  assert(!curve.controls.empty());
  constexpr double kInfinity = std::numeric_limits<double>::infinity();
  double main = -kInfinity;
  double overbank = kInfinity;
  for (const ControlCoefficients& control : curve.controls) {
    if (control.kind == ControlKind::overbank) {
      overbank = std::min(overbank, control.h0_m);
    } else {
      main = std::max(main, control.h0_m);
    }
  }
  return main == -kInfinity ? overbank : std::min(main, overbank);
}

std::optional<double> level_of(const RatingCurve& curve, double discharge_m3s) {
  constexpr double kSearched = 50;      // m above cease-to-flow
  constexpr double kResolution = 1e-9;  // m
  if (!(discharge_m3s > 0)) return {};
  double low = cease_to_flow_m(curve);
  double high = low + kSearched;
  if (evaluate(curve, high).discharge_m3s < discharge_m3s) return {};
  while (high - low > kResolution) {
    const double middle = low + (high - low) / 2;
    (evaluate(curve, middle).discharge_m3s < discharge_m3s ? low : high) = middle;
  }
  return high;
}

}  // namespace scourbook::rating
