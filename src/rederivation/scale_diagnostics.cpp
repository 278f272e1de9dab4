// Is the held velocity scale still right? And what would the other policy give?

#include <fmt/format.h>
#include <Eigen/Cholesky>

#include <algorithm>
#include <cmath>

#include "rating/evaluate.hpp"
#include "rating/residual_tests.hpp"
#include "rating/unknowns.hpp"
#include "rederivation/diagnostics.hpp"

namespace scourbook::rederivation {
namespace {

using rating::Matrix;
using rating::Observation;
using rating::Vector;

constexpr double kLevel = 0.05;               // of the tests
constexpr double kTwoSided = 1.959963984540;  // normal quantile at 0.975
constexpr double kPower = 0.841621233573;     // normal quantile at 0.80

std::vector<Observation> discharges(const std::vector<Observation>& used) {
  std::vector<Observation> result;
  std::copy_if(used.begin(), used.end(), std::back_inserter(result),
               [](const Observation& seen) { return seen.role == Observation::Role::discharge; });
  return result;
}

bool any_held(const Derivation& d) {
  return std::any_of(d.prior.held.begin(), d.prior.held.end(), [](bool held) { return held; });
}

/// Deviations from the curve that held and surveyed values alone give, linear in the unknowns around the fit,
/// and their covariance: of everything that is unknown, and of the gaugings.
struct Deviations {
  Vector r;
  Matrix v;
};

Deviations deviations_of(const Derivation& d, const std::vector<Observation>& seen) {
  const auto unknowns = rating::unknowns_of(d.curve);
  const Matrix jacobian = rating::residual_jacobian(d.curve, seen, unknowns);
  Vector move(static_cast<Eigen::Index>(unknowns.size()));
  for (Eigen::Index i = 0; i < move.size(); ++i) {
    const auto at = static_cast<std::size_t>(i);
    move(i) = d.prior.held[at] ? 0 : rating::value_of(d.curve, unknowns[at]) - d.prior.mean(i);
  }
  Deviations result;
  result.r = rating::residuals(d.curve, seen) - jacobian * move;
  result.v = jacobian * d.prior.covariance * jacobian.transpose();
  result.v += rating::residual_sds(d.curve, seen).cwiseAbs2().asDiagonal();
  return result;
}

double percent(double ln) {
  return 100 * std::expm1(ln);
}

Diagnostic not_possible(const std::string& name, const std::string& text, const std::string& rule,
                        const std::string& source) {
  return {name, {}, {}, "not possible", text, rule, source};
}

/// ": channel 1.31 instead of 1.25": of the held controls that carried flow at a gauging.
std::string preferred_scales(const Derivation& d, const std::vector<Observation>& seen, double factor) {
  const auto unknowns = rating::unknowns_of(d.curve);
  const Matrix jacobian = rating::residual_jacobian(d.curve, seen, unknowns);
  std::string text;
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    if (unknowns[i].kind != rating::UnknownKind::ln_v1 || !d.prior.held[i]) continue;
    if (jacobian.col(static_cast<Eigen::Index>(i)).isZero(0)) continue;
    const ControlCoefficients& control = d.curve.controls[static_cast<std::size_t>(unknowns[i].control)];
    text += fmt::format("{}{} {:.4g} instead of {:.4g}", text.empty() ? ": " : ", ", control.name,
                        control.velocity_scale * std::exp(factor), control.velocity_scale);
  }
  return text;
}

/// Largest |ln| between two curves over levels from just above both offsets to the top.
double largest_gap(const RatingCurve& a, const RatingCurve& b, double top_m) {
  const double from = std::max(rating::cease_to_flow_m(a), rating::cease_to_flow_m(b));
  double gap = 0;
  constexpr int kSteps = 100;
  for (int i = 5; i <= kSteps; ++i) {
    const double level = from + (top_m - from) * i / kSteps;
    const double qa = rating::evaluate(a, level).discharge_m3s, qb = rating::evaluate(b, level).discharge_m3s;
    if (qa > 0 && qb > 0) gap = std::max(gap, std::abs(std::log(qa / qb)));
  }
  return gap;
}

}  // namespace

void test_held_scale(const Derivation& d, std::vector<Diagnostic>& out) {
  if (!any_held(d)) return;
  const std::string rule = "score test of a common factor on the flows, one degree of freedom, at 5 %";
  const std::string source = "Rao 1948 (from memory); applied by an own rule";
  const auto seen = discharges(d.used);
  if (seen.empty()) {
    out.push_back(not_possible("held_scale_score",
                               "the held velocity scale cannot be tested without a gauging", rule, source));
    return;
  }
  const Deviations dev = deviations_of(d, seen);
  const Eigen::LLT<Matrix> root(dev.v);
  const Vector ones = Vector::Ones(dev.r.size());
  const double information = ones.dot(root.solve(ones));
  const double factor = ones.dot(root.solve(dev.r)) / information;
  const double sd = 1 / std::sqrt(information);
  const double score = factor * factor * information;
  const double limit = kTwoSided * kTwoSided;
  const double detectable = percent((kTwoSided + kPower) * sd);
  out.push_back(
      {"held_scale_score", score, limit, score <= limit ? "passed" : "failed",
       fmt::format(
           "held velocity scale: the gaugings prefer one {:+.1f} % different (sd {:.1f} %); score {:.2f} "
           "against {:.2f}{}. The smallest change that they would show with 80 % probability is {:.0f} %",
           percent(factor), 100 * sd, score, limit,
           score <= limit ? "" : ": SLOPE OR ROUGHNESS MAY HAVE CHANGED", detectable),
       rule, source});
  out.push_back({"preferred_scale_change_pct",
                 percent(factor),
                 {},
                 "note",
                 fmt::format("velocity scale that the gaugings prefer: {:+.1f} % (sd {:.1f} %){}",
                             percent(factor), 100 * sd, preferred_scales(d, seen, factor)),
                 rule,
                 source});
  out.push_back(
      {"detectable_scale_change_pct",
       detectable,
       {},
       "note",
       fmt::format("smallest change of the scale that these gaugings could show: {:.0f} %", detectable),
       "80 % power at 5 %",
       "common practice"});
  const double chi = dev.r.dot(root.solve(dev.r));
  const double chi_limit = rating::chi_square_quantile(1 - kLevel, static_cast<double>(dev.r.size()));
  out.push_back(
      {"held_chi_square", chi, chi_limit, chi <= chi_limit ? "passed" : "failed",
       fmt::format(
           "deviations of {} gaugings from the curve before trimming: chi-square {:.1f} against {:.1f}",
           dev.r.size(), chi, chi_limit),
       "chi-square with as many degrees of freedom as gaugings, at 5 %", "Pearson 1900 (from memory)"});
}

void tell_refined_scale(const Derivation& d, std::vector<Diagnostic>& out) {
  if (d.input.options.hold != HoldPolicy::carried || !d.input.parent) return;
  const auto unknowns = rating::unknowns_of(d.curve);
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    if (unknowns[i].kind != rating::UnknownKind::ln_v1) continue;
    const auto at = static_cast<Eigen::Index>(i);
    const double before = d.prior.mean(at), after = rating::value_of(d.curve, unknowns[i]);
    const double sd = std::sqrt(d.prior.covariance(at, at));
    const std::string& name = d.curve.controls[static_cast<std::size_t>(unknowns[i].control)].name;
    out.push_back({"refined_scale_move_sd " + name, (after - before) / sd, 3.0,
                   std::abs(after - before) <= 3 * sd ? "passed" : "failed",
                   fmt::format("{}: velocity scale {:.4g} before, {:.4g} after, a move of {:+.1f} sd", name,
                               std::exp(before), std::exp(after), (after - before) / sd),
                   "a move over 3 sd of the parent's posterior is told", "own rule"});
  }
}

void tell_other_policy(const Derivation& d, std::vector<Diagnostic>& out) {
  if (!d.input.parent) return;
  rating::Prior other = d.prior;
  const auto unknowns = rating::unknowns_of(d.curve);
  const bool now_held = any_held(d);
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    const auto kind = unknowns[i].kind;
    const bool of_scale = kind == rating::UnknownKind::ln_v1 || kind == rating::UnknownKind::dh ||
                          kind == rating::UnknownKind::dc;
    const bool from_parent =
        of_scale && d.curve.controls[static_cast<std::size_t>(unknowns[i].control)].scale_fate != Fate::fresh;
    other.held[i] = from_parent && !now_held;
  }
  RatingCurve start = d.curve;
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    rating::set_value(start, unknowns[i], d.prior.mean(static_cast<Eigen::Index>(i)));
  }
  rating::refresh(start, d.top_m);
  const rating::GaugingFit fit = rating::fit_gaugings(start, other, d.used, d.top_m);
  const bool usable = fit.status == rating::FitStatus::converged || fit.status == rating::FitStatus::at_kink;
  const char* policy = now_held ? "carried" : "velocity-scale";
  if (!usable) return;
  const double gap = percent(largest_gap(d.curve, fit.curve, d.top_m));
  out.push_back({"other_policy_largest_gap_pct",
                 gap,
                 {},
                 "note",
                 fmt::format("with --hold {} the flows would differ by {:.1f} % at most", policy, gap),
                 "largest difference of flows from 5 % of the depth to the top",
                 "own rule"});
}

}  // namespace scourbook::rederivation
