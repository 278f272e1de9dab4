#pragma once
// What is known of a curve's unknowns before its gaugings: from the parent's posterior, from marks on fixed
// ground, and from the prior sds of what is new.

#include <vector>

#include "rating/gauging_fit.hpp"
#include "rederivation/derive.hpp"
#include "rederivation/inherited_control.hpp"

namespace scourbook::rederivation {

struct Knowledge {
  rating::Prior prior;
  std::vector<std::string> remarks;
};

/// In the order of rating::unknowns_of(curve); `curve` holds the controls of `starts`.
///
///   x_new = M x_parent + c + noise,   covariance = M P M' + noise variances
///
/// v1, dh and dc of a control that goes on are the parent's own, held unless the policy is `carried`. e_s is
/// new knowledge, but where both surveys share marks on fixed ground it is the parent's e_s - D, and where
/// the survey is the parent's own it goes on. A carried control keeps the errors of the survey that it
/// comes from: e_k goes on from the parent's e_s + e_k, ec from the parent's, each with three times the usual
/// sd.
[[nodiscard]] Knowledge knowledge_of(const Input& input, const RatingCurve& curve,
                                     const std::vector<ControlStart>& starts);

}  // namespace scourbook::rederivation
