#pragma once
// Fits the unknowns of a curve to gaugings, given what is known of the unknowns beforehand.

#include <string>
#include <vector>

#include "rating/least_squares.hpp"
#include "rating/unknowns.hpp"
#include "terms/curve.hpp"

namespace scourbook::rating {

/// What one gauging says of the curve.
struct Observation {
  enum class Role { discharge, zero_flow, zero_flow_level };
  std::string gauging;
  Role role = Role::discharge;
  double level_m = 0;
  double discharge_m3s = 0;
  double sd_ln_q = 0.04;  ///< of the discharge alone, one sd
  double sd_level_m = 0.005;
  int control = -1;  ///< whose lowest point a zero-flow level is of
};
[[nodiscard]] const char* word(Observation::Role role);  ///< "discharge", "zero flow", "zero-flow level"

/// The least depth over the governing control, m, at which a gauging can be fitted.
inline constexpr double kLeastGaugedDepth = 0.01;
/// Bound of dlnQ/dz in the stage part of a gauging's variance, 1/m.
inline constexpr double kSteepestLogSlope = 1 / 0.05;

/// Residuals on the curve, one an observation:
///   discharge        ln Q_i - ln Q(z_i)
///   zero flow        max(0, z_i - highest offset of section and channel)
///   zero-flow level  z_i - (lowest point + level error of its control)
/// Every discharge must be feasible.
[[nodiscard]] Vector residuals(const RatingCurve& curve, const std::vector<Observation>& observations);
[[nodiscard]] Matrix residual_jacobian(const RatingCurve& curve, const std::vector<Observation>& observations,
                                       const std::vector<Unknown>& unknowns);
/// sd of each residual: for a discharge sqrt(u_i^2 + r^2 + (dlnQ/dz u_z)^2), else u_z.
[[nodiscard]] Vector residual_sds(const RatingCurve& curve, const std::vector<Observation>& observations);
/// Whether each discharge has kLeastGaugedDepth over section and channel (over the lowest overbank control
/// where there is neither).
[[nodiscard]] bool is_feasible(const RatingCurve& curve, const std::vector<Observation>& observations);

/// What is known of a curve's unknowns beforehand: all of unknowns_of(curve), normal, some of them held
/// exactly.
struct Prior {
  Vector mean;
  Matrix covariance;  ///< held ones included: it goes into the bands
  std::vector<bool> held;
};

/// sd of each unknown given the held ones; 0 for those.
[[nodiscard]] Vector sds_given_held(const Prior& prior);

struct GaugingFit {
  FitStatus status = FitStatus::not_run;
  RatingCurve curve;  ///< refreshed at the fitted unknowns; held coefficients untouched
  Matrix covariance;  ///< posterior of all unknowns, held ones included
  int steps = 0;
  /// Gaugings within 1 mm of the takeover, where the fit ended on a kink.
  std::vector<std::string> at_takeover;
};

/// The fit. Held unknowns stay exactly what `curve` has; the others get, given the held ones, their prior and
/// the observations. Starts from the smallest move in prior sd that makes every discharge feasible.
///
/// Covariance, with P of the held, H^-1 of the free and G = H^-1 Jt' W Jp:  [P, -P G'; -G P, H^-1 + G P G'].
[[nodiscard]] GaugingFit fit_gaugings(const RatingCurve& curve, const Prior& prior,
                                      const std::vector<Observation>& observations, double top_m);

/// The curve at the smallest move of the free unknowns, in prior sd, that makes every discharge feasible; the
/// curve itself where it is so already. Offsets only move down; nothing where all that move them are held.
[[nodiscard]] RatingCurve feasible_start(const RatingCurve& curve, const Prior& prior,
                                         const std::vector<Observation>& observations, double top_m);

}  // namespace scourbook::rating
