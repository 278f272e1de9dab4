#include "rating/least_squares.hpp"

#include <Eigen/QR>
#include <algorithm>
#include <cassert>
#include <cmath>

namespace scourbook::rating {
namespace {

constexpr double kShortStep = 1e-6;  // in sd
// Below this length of a step, in sd, the sum of squares may no longer show a decrease in its rounding
// (levels carry 1e-13 m and more), while the step itself is still good to far more digits.
constexpr double kFlat = 1e-3;
constexpr double kRoundingOfSum = 1e-9;

using Factorisation = Eigen::ColPivHouseholderQR<Matrix>;

/// Columns are scaled to unit length before the factorisation, so that rank does not depend on units.
Vector column_lengths(const Matrix& a) {
  Vector lengths = a.colwise().norm().transpose();
  for (double& length : lengths) {
    if (!(length > 0)) length = 1;
  }
  return lengths;
}

/// sd of a weighted residual, by which steps are measured where the variance is not known.
double residual_unit(const Vector& r, const Matrix& j) {
  const auto free = static_cast<double>(j.rows() - j.cols());
  return r.norm() / std::sqrt(std::max(1.0, free));
}

/// One fit under way.
class Minimisation {
 public:
  Minimisation(const LeastSquaresProblem& problem, const LeastSquaresOptions& options)
      : problem_(problem), options_(options) {}

  LeastSquaresFit run(const Vector& start);

 private:
  [[nodiscard]] bool is_feasible(const Vector& x) const { return !problem_.feasible || problem_.feasible(x); }
  [[nodiscard]] Vector sds_at(const Vector& x, Eigen::Index count) const {
    return problem_.sds ? problem_.sds(x) : Vector(Vector::Ones(count));
  }
  [[nodiscard]] Vector stacked_residuals(const Vector& x, const Vector& sds) const;
  [[nodiscard]] Matrix stacked_jacobian(const Vector& x, const Vector& sds) const;
  /// Moves x by the largest halved fraction of `step` that lowers the sum of squares; false where none does.
  bool halve_into_decrease(const Vector& step, const Vector& sds);
  /// Moves x by the whole of a short step that raises the sum by no more than rounding.
  bool step_on_the_flat(const Vector& step, const Vector& sds, double unit);
  /// Sum of squares, residual sd and covariance at x.
  void finish();

  const LeastSquaresProblem& problem_;
  const LeastSquaresOptions& options_;
  LeastSquaresFit fit_;
};

Vector Minimisation::stacked_residuals(const Vector& x, const Vector& sds) const {
  const Vector r = problem_.residuals(x);
  Vector all(r.size() + problem_.prior_values.size());
  all.head(r.size()) = r.cwiseQuotient(sds);
  if (problem_.prior_values.size() > 0) {
    all.tail(problem_.prior_values.size()) = problem_.prior_rows * x - problem_.prior_values;
  }
  return all;
}

Matrix Minimisation::stacked_jacobian(const Vector& x, const Vector& sds) const {
  const Matrix j = problem_.jacobian(x);
  Matrix all(j.rows() + problem_.prior_rows.rows(), x.size());
  all.topRows(j.rows()) = sds.cwiseInverse().asDiagonal() * j;
  if (problem_.prior_rows.rows() > 0) all.bottomRows(problem_.prior_rows.rows()) = problem_.prior_rows;
  return all;
}

bool Minimisation::halve_into_decrease(const Vector& step, const Vector& sds) {
  const double before = stacked_residuals(fit_.x, sds).squaredNorm();
  double fraction = 1;
  for (int halving = 0; halving <= options_.max_halvings; ++halving, fraction /= 2) {
    const Vector tried = fit_.x + fraction * step;
    if (!is_feasible(tried)) continue;
    const double after = stacked_residuals(tried, sds).squaredNorm();
    if (std::isfinite(after) && after < before) {
      fit_.x = tried;
      return true;
    }
  }
  return false;
}

bool Minimisation::step_on_the_flat(const Vector& step, const Vector& sds, double unit) {
  const Vector tried = fit_.x + step;
  if (!is_feasible(tried)) return false;
  const double before = stacked_residuals(fit_.x, sds).squaredNorm();
  const double after = stacked_residuals(tried, sds).squaredNorm();
  if (!(after <= before + kRoundingOfSum * std::max(unit * unit, before))) return false;
  fit_.x = tried;
  return true;
}

void Minimisation::finish() {
  const Eigen::Index count = problem_.residuals(fit_.x).size();
  const Vector sds = sds_at(fit_.x, count);
  const Matrix j = stacked_jacobian(fit_.x, sds);
  fit_.sum_of_squares = stacked_residuals(fit_.x, sds).squaredNorm();
  const Eigen::Index free = j.rows() - j.cols();
  fit_.residual_sd = free > 0 ? std::sqrt(fit_.sum_of_squares / static_cast<double>(free)) : 0;
  fit_.covariance = inverse_of_squares(j);
  if (fit_.covariance.size() == 0) fit_.status = FitStatus::rank_deficient;
  if (!options_.variance_known) fit_.covariance *= fit_.residual_sd * fit_.residual_sd;
}

LeastSquaresFit Minimisation::run(const Vector& start) {
  fit_.x = start;
  if (!is_feasible(start)) {
    fit_.status = FitStatus::infeasible_start;
    return fit_;
  }
  fit_.status = FitStatus::too_many_steps;
  double last_length = kFlat;  // in sd; on the flat each step must be shorter than the one before
  for (fit_.steps = 0; fit_.steps < options_.max_steps; ++fit_.steps) {
    const Vector sds = sds_at(fit_.x, problem_.residuals(fit_.x).size());
    const Vector r = stacked_residuals(fit_.x, sds);
    const Matrix j = stacked_jacobian(fit_.x, sds);
    const Vector lengths = column_lengths(j);
    const Factorisation qr(j * lengths.cwiseInverse().asDiagonal());
    if (j.rows() < j.cols() || qr.rank() < j.cols()) {
      fit_.status = FitStatus::rank_deficient;
      return fit_;
    }
    const Vector step = -lengths.cwiseInverse().cwiseProduct(Vector(qr.solve(r)));
    const double length = (j * step).norm();  // in sd of the unknowns where the sds are right
    const double unit = options_.variance_known ? 1 : residual_unit(r, j);
    if (length <= options_.stop_at_step * unit) {
      if (is_feasible(fit_.x + step)) fit_.x += step;
      fit_.status = FitStatus::converged;
      break;
    }
    const bool on_the_flat = length < std::min(kFlat, last_length) * unit;
    last_length = length / unit;
    if (on_the_flat && step_on_the_flat(step, sds, unit)) continue;
    if (!halve_into_decrease(step, sds)) {
      // A short step without a decrease is rounding: the sum is flat to its last digits.
      fit_.status = length <= kShortStep * unit ? FitStatus::converged : FitStatus::at_kink;
      break;
    }
  }
  finish();
  return fit_;
}

}  // namespace

Matrix inverse_of_squares(const Matrix& a) {
  if (a.rows() < a.cols()) return {};
  const Vector lengths = column_lengths(a);
  const Factorisation qr(a * lengths.cwiseInverse().asDiagonal());
  if (qr.rank() < a.cols()) return {};
  const Eigen::Index n = a.cols();
  const Matrix r = qr.matrixR().topLeftCorner(n, n);
  const Matrix r_inverse = r.triangularView<Eigen::Upper>().solve(Matrix::Identity(n, n));
  const Matrix spread = lengths.cwiseInverse().asDiagonal() * (qr.colsPermutation() * r_inverse);
  return spread * spread.transpose();
}

LeastSquaresFit minimise(const LeastSquaresProblem& problem, const Vector& start,
                         const LeastSquaresOptions& options) {
  assert(problem.residuals && problem.jacobian);
  assert(problem.prior_rows.rows() == problem.prior_values.size());
  assert(options.max_steps > 0 && options.max_halvings > 0 && options.stop_at_step > 0);
  return Minimisation(problem, options).run(start);
}

}  // namespace scourbook::rating
