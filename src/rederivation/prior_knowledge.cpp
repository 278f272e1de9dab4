#include "rederivation/prior_knowledge.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "rating/bands.hpp"
#include "rating/unknowns.hpp"
#include "rederivation/level_marks.hpp"

namespace scourbook::rederivation {
namespace {

using rating::Matrix;
using rating::Unknown;
using rating::UnknownKind;
using rating::Vector;

int index_of(const std::vector<Unknown>& all, Unknown unknown) {
  const auto at = std::find(all.begin(), all.end(), unknown);
  return at == all.end() ? -1 : static_cast<int>(at - all.begin());
}

bool is_crest(const ControlCoefficients& control) {
  return control.law == FlowLaw::critical;
}

/// Prior sd of an unknown that nothing is known of from elsewhere.
double own_sd(const ControlStart& start, UnknownKind kind) {
  const bool crest = is_crest(start.control);
  const double slot = start.narrow_slot ? 2 : 1;
  const double carried = start.control.survey_fate == Fate::carried ? prior_sd::kCarried : 1;
  switch (kind) {
    case UnknownKind::ln_v1:
      return start.scale_sd;
    case UnknownKind::dh:
      return slot * (crest ? prior_sd::kDhCrest : prior_sd::kDh);
    case UnknownKind::dc:
      return crest ? prior_sd::kDcCrest : prior_sd::kDc;
    case UnknownKind::e_k:
      return carried * prior_sd::kEk;
    case UnknownKind::ec:
      return carried * prior_sd::kEc;
    case UnknownKind::level_error:
      break;
  }
  return 0;
}

class Builder {
 public:
  Builder(const Input& input, const RatingCurve& curve, const std::vector<ControlStart>& starts)
      : input_(input), curve_(curve), starts_(starts), unknowns_(rating::unknowns_of(curve)) {
    const auto n = static_cast<Eigen::Index>(unknowns_.size());
    knowledge_.prior.mean = Vector::Zero(n);
    knowledge_.prior.held.assign(unknowns_.size(), false);
    noise_ = Vector::Zero(n);
    if (input.parent) {
      parent_unknowns_ = rating::unknowns_of(input.parent->curve);
      links_ = Matrix::Zero(n, static_cast<Eigen::Index>(parent_unknowns_.size()));
    }
  }

  Knowledge run() {
    for (std::size_t i = 0; i < unknowns_.size(); ++i) {
      const auto at = static_cast<Eigen::Index>(i);
      knowledge_.prior.mean(at) = rating::value_of(curve_, unknowns_[i]);
      if (unknowns_[i].kind == UnknownKind::level_error) {
        level_error(at);
      } else {
        of_control(at, unknowns_[i]);
      }
    }
    Matrix covariance = noise_.cwiseAbs2().asDiagonal();
    if (input_.parent) {
      covariance += links_ * rating::covariance_matrix(input_.parent->curve) * links_.transpose();
    }
    knowledge_.prior.covariance = covariance;
    return std::move(knowledge_);
  }

 private:
  void level_error(Eigen::Index at) {
    const double stated = input_.survey.level_uncertainty_m.value_or(prior_sd::kSurveyLevel);
    noise_(at) = std::max(stated, prior_sd::kLeastLevel);
    if (!input_.parent || !input_.parent->survey) return;
    const RatingCurve& parent = input_.parent->curve;
    const Survey& before = *input_.parent->survey;
    if (before.id == input_.survey.id) {
      link(at, {UnknownKind::level_error, -1}, parent.survey_level_error_m);
      noise_(at) = prior_sd::kLeastMarks;
      knowledge_.remarks.push_back(
          fmt::format("survey {} is the parent's own: its level error goes on", before.id));
      return;
    }
    const auto marks = mark_shift(before, input_.survey);
    if (!marks) return;
    link(at, {UnknownKind::level_error, -1}, parent.survey_level_error_m - marks->shift_m);
    noise_(at) = marks->sd_m;
    knowledge_.remarks.push_back(
        fmt::format("{} mark{} on fixed ground: survey {} lies {:+.3f} m against survey {} (sd "
                    "{:.3f} m); taken out",
                    marks->count, marks->count == 1 ? "" : "s", input_.survey.id, marks->shift_m, before.id,
                    marks->sd_m));
    if (marks->largest_gap_m > 0.05) {
      knowledge_.remarks.push_back(
          fmt::format("mark {} is {:.3f} m off the others: did it move, or is it another one?",
                      marks->largest_at, marks->largest_gap_m));
    }
  }

  void of_control(Eigen::Index at, Unknown unknown) {
    const ControlStart& start = starts_[static_cast<std::size_t>(unknown.control)];
    const bool of_scale = unknown.kind == UnknownKind::ln_v1 || unknown.kind == UnknownKind::dh ||
                          unknown.kind == UnknownKind::dc;
    if (start.in_parent >= 0 && of_scale) {
      link(at, {unknown.kind, start.in_parent}, knowledge_.prior.mean(at));
      knowledge_.prior.held[static_cast<std::size_t>(at)] = input_.options.hold != HoldPolicy::carried;
      if (unknown.kind == UnknownKind::ln_v1) noise_(at) = start.extra_ln_v1_sd;
      return;
    }
    noise_(at) = own_sd(start, unknown.kind);
    if (start.control.survey_fate == Fate::carried) keep_trim(at, start, unknown.kind);
  }

  /// The section is as surveyed before: so are the errors of that survey, of its levels the common one too.
  void keep_trim(Eigen::Index at, const ControlStart& start, UnknownKind kind) {
    const RatingCurve& parent = input_.parent->curve;
    const ControlCoefficients& before = parent.controls[static_cast<std::size_t>(start.in_parent)];
    if (kind == UnknownKind::ec) {
      link(at, {UnknownKind::ec, start.in_parent}, before.trim_c);
      return;
    }
    link(at, {UnknownKind::e_k, start.in_parent}, before.trim_h0_m);
    if (before.survey_fate == Fate::carried) return;
    link(at, {UnknownKind::level_error, -1}, before.trim_h0_m + parent.survey_level_error_m);
  }

  void link(Eigen::Index at, Unknown parent_unknown, double mean) {
    const int to = index_of(parent_unknowns_, parent_unknown);
    links_(at, to) = 1;
    knowledge_.prior.mean(at) = mean;
  }

  const Input& input_;
  const RatingCurve& curve_;
  const std::vector<ControlStart>& starts_;
  std::vector<Unknown> unknowns_, parent_unknowns_;
  Knowledge knowledge_;
  Matrix links_;
  Vector noise_;
};

}  // namespace

Knowledge knowledge_of(const Input& input, const RatingCurve& curve,
                       const std::vector<ControlStart>& starts) {
  return Builder(input, curve, starts).run();
}

}  // namespace scourbook::rederivation
