#include "rating/gauging_fit.hpp"

#include <Eigen/Cholesky>
#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

namespace scourbook::rating {
namespace {

using Indices = std::vector<int>;

/// The free unknowns, given the held ones at their prior means.
struct FreePrior {
  Indices free, held;
  Vector mean;        ///< of the free
  Matrix on_held;     ///< B: d mean / d held
  Matrix covariance;  ///< S, given the held
  Matrix rows;        ///< whitening: L^-1 with S = L L'
};

FreePrior given_held(const Prior& prior) {
  FreePrior p;
  for (int i = 0; i < static_cast<int>(prior.held.size()); ++i)
    (prior.held[i] ? p.held : p.free).push_back(i);
  p.mean = prior.mean(p.free);
  p.covariance = prior.covariance(p.free, p.free);
  p.on_held =
      Matrix::Zero(static_cast<Eigen::Index>(p.free.size()), static_cast<Eigen::Index>(p.held.size()));
  if (!p.held.empty()) {
    const Matrix held = prior.covariance(p.held, p.held);
    const Matrix cross = prior.covariance(p.held, p.free);
    p.on_held = held.ldlt().solve(cross).transpose();
    p.covariance -= p.on_held * cross;
  }
  const Eigen::LLT<Matrix> root(p.covariance);
  assert(root.info() == Eigen::Success);  // every free unknown has a prior sd of its own
  p.rows = root.matrixL().solve(Matrix::Identity(p.covariance.rows(), p.covariance.cols()));
  return p;
}

std::vector<Unknown> pick(const std::vector<Unknown>& all, const Indices& which) {
  std::vector<Unknown> picked;
  for (const int i : which) picked.push_back(all[i]);
  return picked;
}

RatingCurve with_values(RatingCurve curve, const std::vector<Unknown>& unknowns, const Vector& x,
                        double top_m) {
  for (std::size_t j = 0; j < unknowns.size(); ++j) {
    set_value(curve, unknowns[j], x(static_cast<Eigen::Index>(j)));
  }
  refresh(curve, top_m);
  return curve;
}

/// The controls over which every gauging needs depth: section and channel, or the lowest overbank control.
Indices controls_below_flow(const RatingCurve& curve) {
  Indices mains;
  int lowest = 0;
  for (int k = 0; k < static_cast<int>(curve.controls.size()); ++k) {
    if (curve.controls[k].kind != ControlKind::overbank) mains.push_back(k);
    if (curve.controls[k].h0_m < curve.controls[lowest].h0_m) lowest = k;
  }
  return mains.empty() ? Indices{lowest} : mains;
}

/// The smallest move, in units of `covariance`, with rows * move = -excess for the chosen rows.
Vector smallest_move(const Matrix& rows, const Vector& excess, const Matrix& covariance,
                     const Indices& chosen) {
  const Matrix a = rows(chosen, Eigen::all);
  const Matrix spread = covariance * a.transpose();
  return -spread * (a * spread).ldlt().solve(Vector(excess(chosen)));
}

/// The smallest move with rows * move <= -excess: the best of the sets of rows that may bind (there are one
/// or two).
Vector smallest_feasible_move(const Matrix& rows, const Vector& excess, const FreePrior& p) {
  Vector best = Vector::Zero(p.mean.size());
  double best_length = std::numeric_limits<double>::infinity();
  const int sets = 1 << excess.size();
  for (int set = 0; set < sets; ++set) {
    Indices chosen;
    for (int k = 0; k < excess.size(); ++k) {
      if ((set >> k) % 2 == 1) chosen.push_back(k);
    }
    const Vector move = chosen.empty() ? Vector(Vector::Zero(p.mean.size()))
                                       : smallest_move(rows, excess, p.covariance, chosen);
    const bool suffices = (rows * move + excess).maxCoeff() <= 1e-9;
    const double length = (p.rows * move).norm();
    if (suffices && length < best_length) {
      best = move;
      best_length = length;
    }
  }
  return best;
}

/// Posterior of all unknowns from the free ones' Jacobian, and how they follow the held ones.
Matrix whole_covariance(const Prior& prior, const FreePrior& p, const Matrix& free_jacobian,
                        const Matrix& held_jacobian) {
  Matrix stacked(free_jacobian.rows() + p.rows.rows(), p.rows.cols());
  stacked << free_jacobian, p.rows;
  const Matrix inverse_hessian = inverse_of_squares(stacked);
  Matrix whole = prior.covariance;
  if (p.held.empty()) return inverse_hessian;
  const Matrix held = prior.covariance(p.held, p.held);
  const Matrix g = inverse_hessian *
                   (free_jacobian.transpose() * held_jacobian - p.rows.transpose() * (p.rows * p.on_held));
  const Matrix cross = -g * held;
  whole(p.free, p.held) = cross;
  whole(p.held, p.free) = cross.transpose();
  whole(p.free, p.free) = inverse_hessian + g * held * g.transpose();
  return whole;
}

std::vector<std::string> gaugings_at(double level_m, const std::vector<Observation>& observations) {
  constexpr double kNear = 0.001;  // m
  std::vector<std::string> near;
  for (const Observation& seen : observations) {
    if (seen.role == Observation::Role::discharge && std::abs(seen.level_m - level_m) < kNear) {
      near.push_back(seen.gauging);
    }
  }
  return near;
}

RatingCurve start_curve(const RatingCurve& curve, const FreePrior& p,
                        const std::vector<Observation>& observations, double top_m) {
  const std::vector<Unknown> free = pick(unknowns_of(curve), p.free);
  const RatingCurve at_mean = with_values(curve, free, p.mean, top_m);
  double lowest = std::numeric_limits<double>::infinity();
  for (const Observation& seen : observations) {
    if (seen.role == Observation::Role::discharge) lowest = std::min(lowest, seen.level_m);
  }
  if (!(lowest < std::numeric_limits<double>::infinity())) return at_mean;
  const Indices controls = controls_below_flow(at_mean);
  const double margin = kLeastGaugedDepth + 1e-6;
  Matrix rows(static_cast<Eigen::Index>(controls.size()), p.mean.size());
  Vector excess(rows.rows());
  for (Eigen::Index k = 0; k < rows.rows(); ++k) {
    rows.row(k) = offset_gradient(at_mean, controls[k], free).transpose();
    excess(k) = at_mean.controls[controls[k]].h0_m - (lowest - margin);
  }
  return with_values(at_mean, free, p.mean + smallest_feasible_move(rows, excess, p), top_m);
}

}  // namespace

Vector sds_given_held(const Prior& prior) {
  const FreePrior p = given_held(prior);
  Vector sds = Vector::Zero(prior.mean.size());
  for (std::size_t j = 0; j < p.free.size(); ++j) {
    const auto at = static_cast<Eigen::Index>(j);
    sds(p.free[j]) = std::sqrt(p.covariance(at, at));
  }
  return sds;
}

RatingCurve feasible_start(const RatingCurve& curve, const Prior& prior,
                           const std::vector<Observation>& observations, double top_m) {
  return start_curve(curve, given_held(prior), observations, top_m);
}

GaugingFit fit_gaugings(const RatingCurve& curve, const Prior& prior,
                        const std::vector<Observation>& observations, double top_m) {
  const std::vector<Unknown> all = unknowns_of(curve);
  assert(prior.mean.size() == static_cast<Eigen::Index>(all.size()));
  const FreePrior p = given_held(prior);
  const std::vector<Unknown> free = pick(all, p.free);
  const auto at = [&](const Vector& x) { return with_values(curve, free, x, top_m); };

  LeastSquaresProblem problem;
  problem.residuals = [&](const Vector& x) { return residuals(at(x), observations); };
  problem.jacobian = [&](const Vector& x) { return residual_jacobian(at(x), observations, free); };
  problem.sds = [&](const Vector& x) { return residual_sds(at(x), observations); };
  problem.feasible = [&](const Vector& x) { return x.allFinite() && is_feasible(at(x), observations); };
  problem.prior_rows = p.rows;
  problem.prior_values = p.rows * p.mean;

  const RatingCurve from = start_curve(curve, p, observations, top_m);
  Vector start(p.mean.size());
  for (Eigen::Index j = 0; j < start.size(); ++j) start(j) = value_of(from, free[j]);
  const LeastSquaresFit fit = minimise(problem, start);

  GaugingFit result;
  result.status = fit.status;
  result.steps = fit.steps;
  if (!fit.usable()) return result;
  result.curve = at(fit.x);
  const Matrix weighted = residual_sds(result.curve, observations).cwiseInverse().asDiagonal() *
                          residual_jacobian(result.curve, observations, all);
  result.covariance = whole_covariance(prior, p, weighted(Eigen::all, p.free), weighted(Eigen::all, p.held));
  if (fit.status == FitStatus::at_kink && result.curve.takeover_level_m) {
    result.at_takeover = gaugings_at(*result.curve.takeover_level_m, observations);
  }
  return result;
}

}  // namespace scourbook::rating
