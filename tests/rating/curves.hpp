#pragma once
// Curves made by hand, and random ones, for the tests of rating.

#include <catch2/catch.hpp>
#include <cmath>
#include <random>
#include <string>
#include <vector>

#include "rating/gauging_fit.hpp"
#include "rating/unknowns.hpp"
#include "terms/curve.hpp"

namespace made {

using namespace scourbook;

/// A control with its surveyed coefficients; effective ones follow with rating::refresh.
inline ControlCoefficients control(ControlKind kind, double h0_m, double c, double v1, double f) {
  ControlCoefficients made;
  made.kind = kind;
  made.name = std::string(word(kind));
  made.law = kind == ControlKind::section ? FlowLaw::critical : FlowLaw::manning;
  made.velocity_exponent = kind == ControlKind::section ? 0.5 : 2.0 / 3.0;
  made.velocity_scale = v1;
  made.surveyed_h0_m = h0_m;
  made.lowest_point_m = h0_m;
  made.surveyed_c = c;
  made.section_coefficient = f;
  made.reference_depth_m = 0.7;
  made.range_from_m = h0_m;
  made.range_to_m = h0_m + 3;
  return made;
}

/// A crest at 100.40 m, a channel from 100.00 m that takes over, a plain from 103 m. Q(101) is about 5 m3/s.
inline RatingCurve three_controls() {
  RatingCurve curve;
  curve.controls = {control(ControlKind::section, 100.40, 1.1, 0.95, 17.0),
                    control(ControlKind::channel, 100.00, 1.2, 0.9, 6.0),
                    control(ControlKind::overbank, 103.00, 1.05, 0.4, 30.0)};
  rating::refresh(curve, 106);
  return curve;
}

inline RatingCurve one_channel() {
  RatingCurve curve;
  curve.controls = {control(ControlKind::channel, 100.00, 1.2, 0.9, 6.0)};
  rating::refresh(curve, 106);
  return curve;
}

/// Numbers that are the same on every machine: the engine is the standard's, the distributions are not.
class Random {
 public:
  explicit Random(unsigned seed) : engine_(seed) {}
  double between(double low, double high) { return low + (high - low) * unit(); }
  /// Standard normal by the polar form of Box and Muller.
  double normal() {
    for (;;) {
      const double u = between(-1, 1), v = between(-1, 1), s = u * u + v * v;
      if (s > 0 && s < 1) return u * std::sqrt(-2 * std::log(s) / s);
    }
  }

 private:
  double unit() { return (static_cast<double>(engine_()) + 0.5) / 4294967296.0; }
  std::mt19937 engine_;
};

/// Independent, as in a first curve: mean as the curve has it, sds of the usual size.
inline rating::Prior first_prior(const RatingCurve& curve) {
  const auto unknowns = rating::unknowns_of(curve);
  rating::Prior prior;
  const auto n = static_cast<Eigen::Index>(unknowns.size());
  prior.mean = rating::Vector::Zero(n);
  prior.covariance = rating::Matrix::Zero(n, n);
  prior.held.assign(unknowns.size(), false);
  const double sds[] = {0.03, 0.30, 0.20, 0.10, 0.01, 0.02};
  for (Eigen::Index i = 0; i < n; ++i) {
    const auto& unknown = unknowns[static_cast<std::size_t>(i)];
    prior.mean(i) = rating::value_of(curve, unknown);
    const double sd = sds[static_cast<int>(unknown.kind)];
    prior.covariance(i, i) = sd * sd;
  }
  return prior;
}

inline rating::Observation gauging(const std::string& id, double level_m, double discharge_m3s) {
  rating::Observation seen;
  seen.gauging = id;
  seen.level_m = level_m;
  seen.discharge_m3s = discharge_m3s;
  return seen;
}

}  // namespace made
