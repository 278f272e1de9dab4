#pragma once
// Gaugings of the period as observations: which are used, which are left out and why.

#include <string>
#include <vector>

#include "rating/gauging_fit.hpp"
#include "rederivation/derive.hpp"

namespace scourbook::rederivation {

struct OfferedGaugings {
  std::vector<std::string> refusals;
  std::vector<rating::Observation> used;  ///< in the order of input.gaugings
  std::vector<CurveGauging> records;      ///< one for each of input.gaugings
  std::vector<std::string> remarks;
};

/// A gauging is left out by name, or where its shift on `survey_alone` (the curve at the prior mean) exceeds
///   3 sqrt(var of the governing control's offset + u_z^2 + var(ln Q) / (dlnQ/dz)^2),
///   var(ln Q) = var(ln v1) + 0.10^2 + u_i^2 + r^2.
/// The last term is what the flow's uncertainty moves its level by: without it good gaugings of deep water
/// would be far off, and so would those that show a change of the scale (0.10: a third more or less stays,
/// for the score test to see).
[[nodiscard]] OfferedGaugings offer(const Input& input, const RatingCurve& survey_alone,
                                    const rating::Prior& prior);

/// Fills what a record says of the fitted curve.
void judge(CurveGauging& record, const RatingCurve& fitted, const std::vector<rating::Observation>& used);

}  // namespace scourbook::rederivation
