#pragma once
// Standard deviations of a control's effective coefficients, from the covariance of the curve's unknowns.

#include <string>

#include "terms/curve.hpp"

namespace scourbook::cli {

struct CoefficientSds {
  double ln_velocity_scale = 0;  ///< of ln v1
  double h0_m = 0;               ///< dh + e_s + e_k
  double area_exponent = 0;      ///< dc + ec
  double ln_flow_scale = 0;      ///< ln v1 - (dc + ec) ln delta
};

/// Unknowns that the curve does not have count as exactly known.
[[nodiscard]] CoefficientSds coefficient_sds(const RatingCurve& curve, const std::string& control);

}  // namespace scourbook::cli
