#pragma once
// The band table of a curve: sd of ln Q at fixed levels, out of the covariance of its unknowns.

#include <vector>

#include "rating/least_squares.hpp"
#include "terms/curve.hpp"

namespace scourbook::rating {

/// Bound of an sd of ln Q: close to the offset the linear propagation has no meaning, and a factor of
/// exp(1.96 x 3) = 360 up or down says that nothing is known.
inline constexpr double kLargestSd = 3;

/// sd of ln Q at a level from the unknowns alone, without the model error; at most kLargestSd; 0 where there
/// is no flow.
[[nodiscard]] double sd_of_unknowns(const RatingCurve& curve, const Matrix& covariance, double level_m);

/// About 150 levels from 0.01 m above cease-to-flow to `top_m`, evenly spaced in the logarithm of depth, and
/// both sides of the takeover and of each overbank offset; sd with the model error. At least two, strictly
/// rising.
[[nodiscard]] std::vector<BandPoint> band_table(const RatingCurve& curve, const Matrix& covariance,
                                                double top_m);

/// The covariance as stored with the curve, as a matrix, and back.
[[nodiscard]] Matrix covariance_matrix(const RatingCurve& curve);
void store_covariance(RatingCurve& curve, const Matrix& covariance);

}  // namespace scourbook::rating
