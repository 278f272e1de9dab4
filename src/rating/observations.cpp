// Residuals of gaugings on a curve, with their derivatives and sds.

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "rating/evaluate.hpp"
#include "rating/gauging_fit.hpp"

namespace scourbook::rating {
namespace {

using Role = Observation::Role;

constexpr int kNone = -1;

/// The section or channel with the higher offset: where flow ceases. kNone where there is neither.
int highest_main(const RatingCurve& curve) {
  int highest = kNone;
  for (int k = 0; k < static_cast<int>(curve.controls.size()); ++k) {
    const ControlCoefficients& control = curve.controls[k];
    if (control.kind == ControlKind::overbank) continue;
    if (highest == kNone || control.h0_m > curve.controls[highest].h0_m) highest = k;
  }
  return highest;
}

int lowest_overbank(const RatingCurve& curve) {
  const auto lower = [](const auto& a, const auto& b) { return a.h0_m < b.h0_m; };
  const auto lowest = std::min_element(curve.controls.begin(), curve.controls.end(), lower);
  return static_cast<int>(lowest - curve.controls.begin());
}

/// The control over whose offset flow begins.
int first_control(const RatingCurve& curve) {
  const int main = highest_main(curve);
  return main == kNone ? lowest_overbank(curve) : main;
}

double level_trim(const RatingCurve& curve, int control) {
  const ControlCoefficients& c = curve.controls.at(control);
  return c.trim_h0_m + (c.survey_fate == Fate::carried ? 0 : curve.survey_level_error_m);
}

double residual(const RatingCurve& curve, const Observation& seen) {
  if (seen.role == Role::zero_flow) {
    return std::max(0.0, seen.level_m - curve.controls[first_control(curve)].h0_m);
  }
  if (seen.role == Role::zero_flow_level) {
    return seen.level_m - (curve.controls.at(seen.control).lowest_point_m + level_trim(curve, seen.control));
  }
  return std::log(seen.discharge_m3s / evaluate(curve, seen.level_m).discharge_m3s);
}

Vector residual_gradient(const RatingCurve& curve, const Observation& seen,
                         const std::vector<Unknown>& unknowns) {
  if (seen.role == Role::discharge) return -ln_q_gradient(curve, seen.level_m, unknowns);
  if (seen.role == Role::zero_flow) {
    const int control = first_control(curve);
    Vector gradient = -offset_gradient(curve, control, unknowns);
    if (seen.level_m <= curve.controls[control].h0_m) gradient.setZero();
    return gradient;
  }
  Vector gradient = -offset_gradient(curve, seen.control, unknowns);
  for (std::size_t j = 0; j < unknowns.size(); ++j) {
    // The lowest point is as surveyed: the allowance does not move it.
    if (unknowns[j].kind == UnknownKind::dh) gradient(static_cast<Eigen::Index>(j)) = 0;
  }
  return gradient;
}

}  // namespace

const char* word(Role role) {
  if (role == Role::zero_flow) return "zero flow";
  return role == Role::discharge ? "discharge" : "zero-flow level";
}

Vector residuals(const RatingCurve& curve, const std::vector<Observation>& observations) {
  Vector r(static_cast<Eigen::Index>(observations.size()));
  for (Eigen::Index i = 0; i < r.size(); ++i) r(i) = residual(curve, observations[i]);
  return r;
}

Matrix residual_jacobian(const RatingCurve& curve, const std::vector<Observation>& observations,
                         const std::vector<Unknown>& unknowns) {
  Matrix j(static_cast<Eigen::Index>(observations.size()), static_cast<Eigen::Index>(unknowns.size()));
  for (Eigen::Index i = 0; i < j.rows(); ++i) {
    j.row(i) = residual_gradient(curve, observations[i], unknowns).transpose();
  }
  return j;
}

Vector residual_sds(const RatingCurve& curve, const std::vector<Observation>& observations) {
  Vector sds(static_cast<Eigen::Index>(observations.size()));
  for (Eigen::Index i = 0; i < sds.size(); ++i) {
    const Observation& seen = observations[i];
    if (seen.role != Role::discharge) {
      sds(i) = seen.sd_level_m;
      continue;
    }
    const double slope = std::min(kSteepestLogSlope, log_slope(curve, seen.level_m));
    sds(i) = std::sqrt(seen.sd_ln_q * seen.sd_ln_q + curve.model_error * curve.model_error +
                       slope * slope * seen.sd_level_m * seen.sd_level_m);
  }
  return sds;
}

bool is_feasible(const RatingCurve& curve, const std::vector<Observation>& observations) {
  const double offset = curve.controls[first_control(curve)].h0_m;
  return std::all_of(observations.begin(), observations.end(), [&](const Observation& seen) {
    return seen.role != Role::discharge || seen.level_m - offset >= kLeastGaugedDepth;
  });
}

}  // namespace scourbook::rating
