#include "rederivation/offered_gaugings.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "rating/evaluate.hpp"
#include "rating/unknowns.hpp"

namespace scourbook::rederivation {
namespace {

using rating::Observation;
using Role = Observation::Role;

constexpr double kDischargeSd = 0.04;  // half of 8 %, where a gauging states no uncertainty
constexpr double kStageSd = 0.005;     // m
constexpr double kLevelSd = 0.02;      // m, of a measured level of the lowest point
constexpr double kFarOff = 3;          // sds
constexpr double kScaleChange = 0.10;  // sd of a change of ln v1 between two periods
constexpr double kLeastSd = 0.001;     // m

/// The control whose lowest point a zero-flow level is measured at: section, else channel, else the lowest
/// overbank.
int zero_level_control(const RatingCurve& curve) {
  for (const ControlKind kind : {ControlKind::section, ControlKind::channel}) {
    for (std::size_t k = 0; k < curve.controls.size(); ++k) {
      if (curve.controls[k].kind == kind) return static_cast<int>(k);
    }
  }
  return 0;
}

/// The control over which the first water flows: of section and channel the one with the higher offset.
int first_control(const RatingCurve& curve) {
  int first = -1;
  for (std::size_t k = 0; k < curve.controls.size(); ++k) {
    const ControlCoefficients& control = curve.controls[k];
    if (control.kind == ControlKind::overbank) continue;
    if (first < 0 || control.h0_m > curve.controls[static_cast<std::size_t>(first)].h0_m)
      first = static_cast<int>(k);
  }
  return std::max(first, 0);
}

Observation observation_of(const GaugingAtLevel& offered, const RatingCurve& curve) {
  const Gauging& gauging = offered.gauging;
  Observation seen;
  seen.gauging = gauging.id;
  seen.level_m = offered.level_m;
  seen.discharge_m3s = gauging.discharge.m3s();
  seen.sd_ln_q = gauging.uncertainty_pct ? *gauging.uncertainty_pct / 200 : kDischargeSd;
  seen.sd_level_m = std::max(kLeastSd, gauging.stage_uncertainty_m.value_or(kStageSd));
  if (gauging.is_zero_flow_level()) {
    seen.role = Role::zero_flow_level;
    seen.sd_level_m = std::max(kLeastSd, gauging.stage_uncertainty_m.value_or(kLevelSd));
    seen.control = zero_level_control(curve);
  } else if (gauging.is_zero_flow()) {
    seen.role = Role::zero_flow;
  }
  return seen;
}

double variance_along(const rating::Prior& prior, const rating::Vector& gradient) {
  return std::max(0.0, gradient.dot(prior.covariance * gradient));
}

/// Variance of a control's ln v1 beforehand.
double scale_variance(const RatingCurve& curve, const rating::Prior& prior, int control) {
  const auto unknowns = rating::unknowns_of(curve);
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    if (unknowns[i] == rating::Unknown{rating::UnknownKind::ln_v1, control}) {
      return prior.covariance(static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(i));
    }
  }
  return 0;
}

/// What level errors explain of a shift, and what the flow's own uncertainty moves its level by.
double limit_of(const Observation& seen, const RatingCurve& curve, const rating::Prior& prior,
                double at_level_m) {
  const rating::Flow flow = rating::evaluate(curve, at_level_m);
  const int control = flow.control >= 0 ? flow.control : first_control(curve);
  const auto gradient = rating::offset_gradient(curve, control, rating::unknowns_of(curve));
  double variance = variance_along(prior, gradient) + seen.sd_level_m * seen.sd_level_m;
  const double slope = rating::log_slope(curve, at_level_m);
  if (seen.role == Role::discharge && slope > 0) {
    const double of_flow = scale_variance(curve, prior, control) + kScaleChange * kScaleChange +
                           seen.sd_ln_q * seen.sd_ln_q + curve.model_error * curve.model_error;
    variance += of_flow / (slope * slope);
  }
  return kFarOff * std::sqrt(variance);
}

/// Why an observation does not fit the curve that the survey alone gives; empty where it does.
std::string misfit(const Observation& seen, const RatingCurve& curve, const rating::Prior& prior) {
  const double cease = rating::cease_to_flow_m(curve);
  if (seen.role == Role::zero_flow) {
    return seen.level_m - cease > limit_of(seen, curve, prior, cease) ? "far off" : "";
  }
  if (seen.role == Role::zero_flow_level) {
    const rating::Vector residual = rating::residuals(curve, {seen});
    return std::abs(residual(0)) > limit_of(seen, curve, prior, cease) ? "far off" : "";
  }
  const auto level = rating::level_of(curve, seen.discharge_m3s);
  if (!level) return "far off";
  if (std::abs(*level - seen.level_m) <= limit_of(seen, curve, prior, *level)) return "";
  return seen.level_m <= cease ? "below the offset" : "far off";
}

bool named(const std::vector<std::string>& ids, const std::string& id) {
  return std::find(ids.begin(), ids.end(), id) != ids.end();
}

std::string reason_of(const Input& input, const Observation& seen, const RatingCurve& curve,
                      const rating::Prior& prior) {
  if (input.options.without_gaugings) return "derived without gaugings";
  if (named(input.options.leave_out, seen.gauging)) return "left out by name";
  return misfit(seen, curve, prior);
}

}  // namespace

OfferedGaugings offer(const Input& input, const RatingCurve& survey_alone, const rating::Prior& prior) {
  OfferedGaugings result;
  for (const GaugingAtLevel& offered : input.gaugings) {
    const Observation seen = observation_of(offered, survey_alone);
    CurveGauging record;
    record.gauging = seen.gauging;
    record.version = offered.version;
    record.role = word(seen.role);
    record.level_m = seen.level_m;
    record.discharge_m3s = seen.discharge_m3s;
    record.reason = reason_of(input, seen, survey_alone, prior);
    record.use = record.reason.empty() ? GaugingUse::used : GaugingUse::left_out;
    if (record.use == GaugingUse::used) {
      result.used.push_back(seen);
    } else if (record.reason == "far off" || record.reason == "below the offset") {
      result.remarks.push_back(
          fmt::format("gauging {} is left out: {} (level {:.3f} m, {:.4g} m3/s; the curve from the "
                      "survey alone gives {:.4g} m3/s there)",
                      seen.gauging, record.reason, seen.level_m, seen.discharge_m3s,
                      rating::evaluate(survey_alone, seen.level_m).discharge_m3s));
    }
    result.records.push_back(std::move(record));
  }
  for (const auto& id : input.options.leave_out) {
    const bool there = std::any_of(input.gaugings.begin(), input.gaugings.end(),
                                   [&](const GaugingAtLevel& g) { return g.gauging.id == id; });
    if (!there)
      result.refusals.push_back(fmt::format("--leave-out {}: the period holds no such gauging", id));
  }
  return result;
}

void judge(CurveGauging& record, const RatingCurve& fitted, const std::vector<Observation>& used) {
  record.curve_m3s = rating::evaluate(fitted, record.level_m).discharge_m3s;
  if (record.discharge_m3s > 0 && record.curve_m3s > 0 && record.role == word(Role::discharge)) {
    record.residual = std::log(record.discharge_m3s / record.curve_m3s);
  }
  for (const Observation& seen : used) {
    if (seen.gauging == record.gauging && seen.role == Role::discharge)
      record.sd_ln_q = rating::residual_sds(fitted, {seen})(0);
  }
}

}  // namespace scourbook::rederivation
