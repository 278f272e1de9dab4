#include "rederivation/derive.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cassert>
#include <cmath>
#include <set>

#include "rating/bands.hpp"
#include "rating/evaluate.hpp"
#include "rating/unknowns.hpp"
#include "rederivation/diagnostics.hpp"
#include "rederivation/inherited_control.hpp"
#include "rederivation/offered_gaugings.hpp"
#include "rederivation/prior_knowledge.hpp"
#include "rederivation/remarks.hpp"
#include "rederivation/surveyed_control.hpp"

namespace scourbook::rederivation {
namespace {

constexpr double kPoorlyKnown = 0.15;  // sd of ln Q of the parent's curve
constexpr double kBandsAbove = 2;      // depths up to the top that the band table covers

using rating::Observation;

bool positive(const std::optional<double>& value) {
  return value && *value > 0 && std::isfinite(*value);
}

/// Whether a row holds what its flow law needs.
bool states_scale(const ReachRow& row) {
  if (!positive(row.meander_factor) || (row.scale_sd_pct && !positive(row.scale_sd_pct))) return false;
  if (row.law == FlowLaw::critical) return positive(row.coefficient);
  return positive(row.slope) && positive(row.law == FlowLaw::manning ? row.roughness_n : row.chezy_c);
}

/// Faults of the input that no computation can mend.
std::vector<std::string> faults_of(const Input& input) {
  std::vector<std::string> faults;
  if (input.options.hold == HoldPolicy::flow_scale) {
    faults.push_back("--hold flow-scale is not available in this version; velocity-scale and carried are");
  }
  if (input.reach.empty()) {
    faults.push_back("no reach row is in force at the begin of the period; take in a reach file first");
  }
  int sections = 0, channels = 0;
  std::set<std::string> names;
  const auto overbank = std::count_if(input.reach.begin(), input.reach.end(), [](const ReachInput& r) {
    return r.row.control == ControlKind::overbank;
  });
  for (const ReachInput& reach : input.reach) {
    sections += reach.row.control == ControlKind::section;
    channels += reach.row.control == ControlKind::channel;
    const std::string name = control_name(reach.row, overbank > 1);
    if (!states_scale(reach.row)) {
      faults.push_back(
          fmt::format("{}: its reach row lacks what flow law {} needs", name, word(reach.row.law)));
    }
    if (reach.row.control == ControlKind::overbank && !names.insert(name).second) {
      faults.push_back(fmt::format("two overbank controls have the part {}: give their parts different names",
                                   reach.row.part));
    }
  }
  if (sections > 1)
    faults.push_back("the reach file has more than one section control at this time; one is possible");
  if (channels > 1)
    faults.push_back("the reach file has more than one channel control at this time; one is possible");
  return faults;
}

/// The highest level that the survey covers: of the lowest overbank part where there is one, else of the
/// channel, and of a crest only where it stands alone, since its banks say nothing of the section at the
/// gauge.
double top_of(const std::vector<SurveyedControl>& surveyed, const std::vector<ControlStart>& starts) {
  for (const ControlKind kind : {ControlKind::overbank, ControlKind::channel, ControlKind::section}) {
    std::optional<double> top;
    for (std::size_t i = 0; i < starts.size(); ++i) {
      const ControlCoefficients& c = starts[i].control;
      if (c.kind != kind) continue;
      const double own = surveyed[i].found ? surveyed[i].top_m : c.range_to_m;
      top = top ? std::min(*top, own) : own;
    }
    if (top) return *top;
  }
  assert(false);
  return 0;
}

RatingCurve curve_of(const Input& input, const std::vector<ControlStart>& starts) {
  RatingCurve curve;
  curve.station = input.station;
  curve.form = CurveForm::power;
  curve.hold = input.options.hold;
  if (input.parent) {
    curve.parent = input.parent->curve.number;
    curve.lineage = input.parent->curve.lineage;
  }
  curve.survey = input.survey.id;
  curve.survey_version = input.survey_version;
  curve.from = input.from;
  curve.until = input.until;
  for (const ReachInput& reach : input.reach) curve.reach.push_back(reach.id);
  for (const ControlStart& start : starts) {
    curve.controls.push_back(start.control);
    curve.carried = curve.carried || start.control.survey_fate == Fate::carried;
  }
  return curve;
}

/// Sets what is not held to its prior mean.
void set_to_prior(RatingCurve& curve, const rating::Prior& prior, double top_m) {
  const auto unknowns = rating::unknowns_of(curve);
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    if (!prior.held[i]) rating::set_value(curve, unknowns[i], prior.mean(static_cast<Eigen::Index>(i)));
  }
  rating::refresh(curve, top_m);
}

/// What the trims of the new period refit of a control's offset, as a variance.
double trim_variance(const RatingCurve& curve, const rating::Prior& prior, int control) {
  const auto unknowns = rating::unknowns_of(curve);
  const rating::Vector moves = rating::offset_gradient(curve, control, unknowns);
  return moves.cwiseProduct(rating::sds_given_held(prior)).squaredNorm();
}

/// sd of ln Q of a curve at a level, but for as much of its offset's uncertainty as trims refit anyway: close
/// to the offset ln Q of the best curve is uncertain without bound, and holding its scale is right all the
/// same.
double sd_beyond_trims(const RatingCurve& curve, double level_m, int control, double refitted) {
  const rating::Matrix covariance = rating::covariance_matrix(curve);
  const auto unknowns = rating::unknowns_of(curve);
  const rating::Vector of_flow = rating::ln_q_gradient(curve, level_m, unknowns);
  const rating::Vector of_offset = rating::offset_gradient(curve, control, unknowns);
  const double offset = of_offset.dot(covariance * of_offset);
  const double both = of_flow.dot(covariance * of_offset);
  const double through_offset = both * both / offset;
  const double rest = of_flow.dot(covariance * of_flow) - through_offset;
  return std::sqrt(std::max(0.0, rest) + through_offset * std::max(0.0, 1 - refitted / offset));
}

/// Holding what is itself hardly known would carry its error on: refused, with the ways on.
/// `curve` has flow at every gauging.
std::optional<std::string> poorly_known(const Input& input, const std::vector<ControlStart>& starts,
                                        const RatingCurve& curve, const rating::Prior& prior,
                                        const std::vector<Observation>& used) {
  if (!input.parent || input.options.hold != HoldPolicy::velocity_scale) return {};
  const RatingCurve& parent = input.parent->curve;
  double worst = 0;
  std::string at;
  for (const Observation& seen : used) {
    if (seen.role != Observation::Role::discharge) continue;
    const int now = rating::evaluate(curve, seen.level_m).control;
    const int before = now < 0 ? -1 : starts[static_cast<std::size_t>(now)].in_parent;
    if (before < 0) continue;
    const double depth = seen.level_m - curve.controls[static_cast<std::size_t>(now)].h0_m;
    const double level = parent.controls[static_cast<std::size_t>(before)].h0_m + depth;
    const double sd = sd_beyond_trims(parent, level, before, trim_variance(curve, prior, now));
    if (sd > worst) {
      worst = sd;
      at = seen.gauging;
    }
  }
  if (worst <= kPoorlyKnown) return {};
  return fmt::format(
      "curve {} is itself poorly known where gauging {} lies (sd of ln Q {:.2f}, over {:.2f}): holding its "
      "velocity "
      "scale exactly would carry that error on. Either let it be refined by the new gaugings with --hold "
      "carried, or "
      "derive all periods together",
      parent.number, at, worst, kPoorlyKnown);
}

std::string fit_failure(rating::FitStatus status) {
  switch (status) {
    case rating::FitStatus::infeasible_start:
      return "no curve of these controls gives flow at every gauging: offsets would have to lie above "
             "gaugings; look at "
             "the gaugings below, or leave one out with --leave-out";
    case rating::FitStatus::rank_deficient:
      return "the gaugings and what is known beforehand do not determine the curve (rank deficient)";
    default:
      return "the fit did not converge; look at the gaugings, or leave one out with --leave-out";
  }
}

void set_gauged_range(const Input& input, RatingCurve& curve) {
  for (const CurveGauging& g : curve.gaugings) {
    if (g.use == GaugingUse::left_out || g.role != rating::word(Observation::Role::discharge)) continue;
    curve.gauged_low_m3s = std::min(curve.gauged_low_m3s.value_or(g.discharge_m3s), g.discharge_m3s);
    curve.gauged_high_m3s = std::max(curve.gauged_high_m3s.value_or(g.discharge_m3s), g.discharge_m3s);
  }
  curve.inferred = !curve.gauged_high_m3s.has_value();
  curve.lineage_high_m3s = curve.gauged_high_m3s;
  if (!input.parent) return;
  const RatingCurve& parent = input.parent->curve;
  if (curve.inferred) {
    curve.gauged_low_m3s = parent.gauged_low_m3s;
    curve.gauged_high_m3s = parent.gauged_high_m3s;
  }
  if (parent.lineage_high_m3s) {
    curve.lineage_high_m3s = std::max(curve.lineage_high_m3s.value_or(0), *parent.lineage_high_m3s);
  }
}

/// A fitted curve with everything that is stored beside it.
void complete(const Input& input, const std::vector<SurveyedControl>& surveyed, const Knowledge& knowledge,
              const OfferedGaugings& offered, const rating::GaugingFit& fit, double top_m, Result& result) {
  RatingCurve& curve = result.curve;
  const bool refined = input.options.hold == HoldPolicy::carried;
  for (ControlCoefficients& control : curve.controls) {
    control.trim_fate = Fate::refitted;
    if (!refined || control.scale_fate == Fate::fresh) continue;
    control.scale_fate = Fate::refitted;
    control.allowance_fate = Fate::refitted;
    control.calibrated_in = 0;
  }
  rating::store_covariance(curve, fit.covariance);
  curve.gaugings = offered.records;
  for (CurveGauging& record : curve.gaugings) judge(record, curve, offered.used);
  set_gauged_range(input, curve);
  const double cease = rating::cease_to_flow_m(curve);
  curve.bands = rating::band_table(curve, fit.covariance, cease + kBandsAbove * (top_m - cease));
  remark_trims(curve, knowledge.prior);
  for (const auto& gauging : fit.at_takeover) {
    curve.remarks.push_back(fmt::format("takeover at gauging {}: the fit ended on it", gauging));
  }
  if (curve.inferred)
    curve.remarks.push_back(
        "no gauging in the period: the curve is inferred from the survey and what is held");
  remark_governing(curve, curve.surveyed_top_m);
  remark_buried_crest(curve);
  curve.diagnostics =
      diagnose({input, surveyed, knowledge.prior, offered.used, curve, result.before, fit.covariance, top_m});
}

std::vector<std::optional<ControlCoefficients>> before_of(const Input& input,
                                                          const std::vector<ControlStart>& starts) {
  std::vector<std::optional<ControlCoefficients>> before;
  for (const ControlStart& start : starts) {
    before.push_back(
        start.in_parent < 0
            ? std::nullopt
            : std::optional(input.parent->curve.controls[static_cast<std::size_t>(start.in_parent)]));
  }
  return before;
}

Result refused(std::vector<std::string> refusals) {
  Result result;
  result.status = Status::refused;
  result.refusals = std::move(refusals);
  return result;
}

bool is_finite(const RatingCurve& curve) {
  bool finite =
      std::isfinite(curve.survey_level_error_m) && std::isfinite(curve.takeover_level_m.value_or(0));
  for (const ControlCoefficients& c : curve.controls) {
    for (const double value : {c.velocity_scale, c.allowance_h0_m, c.allowance_c, c.reference_depth_m,
                               c.surveyed_h0_m, c.surveyed_c, c.area_coefficient, c.section_coefficient,
                               c.law_misfit, c.trim_h0_m, c.trim_c, c.h0_m, c.exponent, c.flow_scale}) {
      finite = finite && std::isfinite(value);
    }
  }
  for (const double value : curve.covariance) finite = finite && std::isfinite(value);
  for (const BandPoint& point : curve.bands) finite = finite && std::isfinite(point.sd_ln_q);
  return finite;
}

double highest_level(const std::vector<Observation>& used, double top_m) {
  for (const Observation& seen : used) top_m = std::max(top_m, seen.level_m);
  return top_m;
}

}  // namespace

Result derive(const Input& given) {
  auto faults = faults_of(given);
  if (!faults.empty()) return refused(std::move(faults));
  Input input = given;
  std::stable_sort(input.reach.begin(), input.reach.end(),
                   [](const ReachInput& a, const ReachInput& b) { return a.row.control < b.row.control; });
  const auto surveyed = survey_controls(input);
  Inheritance inheritance = inherit(input, surveyed);
  if (!inheritance.refusals.empty()) return refused(std::move(inheritance.refusals));
  const auto& starts = inheritance.controls;

  RatingCurve survey_alone = curve_of(input, starts);
  survey_alone.surveyed_top_m = top_of(surveyed, starts);
  const Knowledge knowledge = knowledge_of(input, survey_alone, starts);
  set_to_prior(survey_alone, knowledge.prior, survey_alone.surveyed_top_m);
  survey_alone.remarks = inheritance.remarks;
  survey_alone.remarks.insert(survey_alone.remarks.end(), knowledge.remarks.begin(), knowledge.remarks.end());

  OfferedGaugings offered = offer(input, survey_alone, knowledge.prior);
  if (!offered.refusals.empty()) return refused(std::move(offered.refusals));
  const double top_m = highest_level(offered.used, survey_alone.surveyed_top_m);
  const RatingCurve feasible = rating::feasible_start(survey_alone, knowledge.prior, offered.used, top_m);
  if (const auto why = poorly_known(input, starts, feasible, knowledge.prior, offered.used))
    return refused({*why});
  const rating::GaugingFit fit = rating::fit_gaugings(survey_alone, knowledge.prior, offered.used, top_m);
  const bool usable = fit.status == rating::FitStatus::converged || fit.status == rating::FitStatus::at_kink;
  if (!usable) {
    std::vector<std::string> words{fit_failure(fit.status)};
    words.insert(words.end(), offered.remarks.begin(), offered.remarks.end());
    return refused(std::move(words));
  }
  Result result;
  result.curve = fit.curve;
  result.curve.remarks.insert(result.curve.remarks.end(), offered.remarks.begin(), offered.remarks.end());
  result.before = before_of(input, starts);
  complete(input, surveyed, knowledge, offered, fit, top_m, result);
  if (!is_finite(result.curve)) {
    return refused({"the numbers run out of range: look at the survey's elevations and at the gaugings"});
  }
  result.status = Status::ok;
  return result;
}

}  // namespace scourbook::rederivation
