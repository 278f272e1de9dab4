#include "rating/unknowns.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>

#include "rating/evaluate.hpp"

namespace scourbook::rating {
namespace {

constexpr UnknownKind kOfControl[] = {UnknownKind::ln_v1, UnknownKind::dh, UnknownKind::dc, UnknownKind::e_k,
                                      UnknownKind::ec};

bool shares_level_error(const ControlCoefficients& control) {
  return control.survey_fate != Fate::carried;
}

bool moves_offset(const ControlCoefficients& control, UnknownKind kind) {
  return kind == UnknownKind::dh || kind == UnknownKind::e_k ||
         (kind == UnknownKind::level_error && shares_level_error(control));
}

double unbounded_area_exponent(const ControlCoefficients& control) {
  return control.surveyed_c + control.allowance_c + control.trim_c;
}

/// d ln Q_k / d unknown of the control's own flow, where it flows.
double control_derivative(const ControlCoefficients& control, double level_m, UnknownKind kind) {
  const double depth = level_m - control.h0_m;
  if (kind == UnknownKind::ln_v1) return 1;
  if (moves_offset(control, kind)) return -control.exponent / depth;
  if (kind == UnknownKind::level_error) return 0;
  const bool at_bound = unbounded_area_exponent(control) < kLeastAreaExponent;
  return at_bound ? 0 : std::log(depth / control.reference_depth_m);
}

void refresh_control(ControlCoefficients& control, double level_error_m) {
  control.h0_m = control.surveyed_h0_m + control.allowance_h0_m + control.trim_h0_m +
                 (shares_level_error(control) ? level_error_m : 0);
  control.area_exponent = std::max(kLeastAreaExponent, unbounded_area_exponent(control));
  control.exponent = control.velocity_exponent + control.area_exponent;
  control.flow_scale = control.velocity_scale * control.section_coefficient *
                       std::pow(control.reference_depth_m, control.surveyed_c - control.area_exponent);
}

const ControlCoefficients* find(const RatingCurve& curve, ControlKind kind) {
  for (const ControlCoefficients& control : curve.controls) {
    if (control.kind == kind) return &control;
  }
  return nullptr;
}

}  // namespace

std::vector<Unknown> unknowns_of(const RatingCurve& curve) {
  std::vector<Unknown> all{{UnknownKind::level_error, -1}};
  for (int k = 0; k < static_cast<int>(curve.controls.size()); ++k) {
    for (const UnknownKind kind : kOfControl) all.push_back({kind, k});
  }
  return all;
}

std::string name_of(const RatingCurve& curve, Unknown unknown) {
  if (unknown.kind == UnknownKind::level_error) return "e_s";
  const char* const words[] = {"e_s", "ln_v1", "dh", "dc", "e_k", "ec"};
  return curve.controls.at(unknown.control).name + "." + words[static_cast<int>(unknown.kind)];
}

double value_of(const RatingCurve& curve, Unknown unknown) {
  if (unknown.kind == UnknownKind::level_error) return curve.survey_level_error_m;
  const ControlCoefficients& control = curve.controls.at(unknown.control);
  switch (unknown.kind) {
    case UnknownKind::ln_v1:
      return std::log(control.velocity_scale);
    case UnknownKind::dh:
      return control.allowance_h0_m;
    case UnknownKind::dc:
      return control.allowance_c;
    case UnknownKind::e_k:
      return control.trim_h0_m;
    case UnknownKind::ec:
      return control.trim_c;
    case UnknownKind::level_error:
      break;
  }
  assert(false);
  return 0;
}

void set_value(RatingCurve& curve, Unknown unknown, double value) {
  if (unknown.kind == UnknownKind::level_error) {
    curve.survey_level_error_m = value;
    return;
  }
  ControlCoefficients& control = curve.controls.at(unknown.control);
  if (unknown.kind == UnknownKind::ln_v1) control.velocity_scale = std::exp(value);
  if (unknown.kind == UnknownKind::dh) control.allowance_h0_m = value;
  if (unknown.kind == UnknownKind::dc) control.allowance_c = value;
  if (unknown.kind == UnknownKind::e_k) control.trim_h0_m = value;
  if (unknown.kind == UnknownKind::ec) control.trim_c = value;
}

void refresh(RatingCurve& curve, double top_m) {
  for (ControlCoefficients& control : curve.controls) refresh_control(control, curve.survey_level_error_m);
  const ControlCoefficients* section = find(curve, ControlKind::section);
  const ControlCoefficients* channel = find(curve, ControlKind::channel);
  curve.takeover_level_m.reset();
  if (section != nullptr && channel != nullptr) {
    curve.takeover_level_m = find_takeover(*section, *channel, top_m);
  }
}

Vector ln_q_gradient(const RatingCurve& curve, double level_m, const std::vector<Unknown>& unknowns) {
  Vector gradient = Vector::Zero(static_cast<Eigen::Index>(unknowns.size()));
  const Flow flow = evaluate(curve, level_m);
  if (!(flow.discharge_m3s > 0)) return gradient;
  for (int k = 0; k < static_cast<int>(curve.controls.size()); ++k) {
    const ControlCoefficients& control = curve.controls[k];
    if (control.kind != ControlKind::overbank && k != flow.control) continue;
    const double share = control_flow(control, level_m) / flow.discharge_m3s;
    if (!(share > 0)) continue;
    for (std::size_t j = 0; j < unknowns.size(); ++j) {
      if (unknowns[j].control != k && unknowns[j].kind != UnknownKind::level_error) continue;
      gradient(static_cast<Eigen::Index>(j)) +=
          share * control_derivative(control, level_m, unknowns[j].kind);
    }
  }
  return gradient;
}

Vector offset_gradient(const RatingCurve& curve, int control, const std::vector<Unknown>& unknowns) {
  Vector gradient = Vector::Zero(static_cast<Eigen::Index>(unknowns.size()));
  for (std::size_t j = 0; j < unknowns.size(); ++j) {
    const bool is_own = unknowns[j].control == control || unknowns[j].kind == UnknownKind::level_error;
    if (is_own && moves_offset(curve.controls.at(control), unknowns[j].kind)) {
      gradient(static_cast<Eigen::Index>(j)) = 1;
    }
  }
  return gradient;
}

}  // namespace scourbook::rating
