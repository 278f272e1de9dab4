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
///   3 sqrt(var of the governing control's offset + u_z^2 + (sd of its ln v1 / (dlnQ/dz))^2).
/// The last term is what an uncertain velocity scale moves the level of a flow by.
[[nodiscard]] OfferedGaugings offer(const Input& input, const RatingCurve& survey_alone,
                                    const rating::Prior& prior);

/// Fills what a record says of the fitted curve.
void judge(CurveGauging& record, const RatingCurve& fitted, const std::vector<rating::Observation>& used);

}  // namespace scourbook::rederivation
