#pragma once
// Weighted nonlinear least squares with prior knowledge: Gauss-Newton with step halving on a QR
// factorisation.
//
// Minimises  sum_i (r_i(x) / s_i)^2 + |R x - c|^2,  where the rows of R and c state what is known beforehand.
// QR and not normal equations: those square the condition number, and on a power law with a free offset they
// stop short of the minimum (NIST StRD, Bennett5). Method: Björck 1996, Numerical Methods for Least Squares
// Problems, sections 9.2 and 2.4 (from memory).
//
//   LeastSquaresProblem line;
//   line.residuals = [&](const Vector& x) { return Vector(y - design * x); };
//   line.jacobian = [&](const Vector&) { return Matrix(-design); };
//   const LeastSquaresFit fit = minimise(line, Vector::Zero(2), {.variance_known = false});

#include <Eigen/Core>
#include <functional>

namespace scourbook::rating {

using Vector = Eigen::VectorXd;
using Matrix = Eigen::MatrixXd;

struct LeastSquaresProblem {
  std::function<Vector(const Vector& x)> residuals;  ///< r(x), unweighted
  std::function<Matrix(const Vector& x)> jacobian;   ///< dr/dx, one row a residual
  /// s(x), one sd a residual, frozen within a step; empty: all 1.
  std::function<Vector(const Vector& x)> sds;
  /// Whether r may be evaluated at x; empty: everywhere. Steps are halved to stay inside.
  std::function<bool(const Vector& x)> feasible;
  /// What is known beforehand, whitened: rows R and right side c (one row per unknown: 1/sd and mean/sd). May
  /// be empty.
  Matrix prior_rows;
  Vector prior_values;
};

struct LeastSquaresOptions {
  int max_steps = 500;    ///< at least 1
  int max_halvings = 30;  ///< at least 1
  double stop_at_step =
      1e-9;  ///< length of a step in sd of the unknowns at which the fit has converged; over 0
  /// The sds are what they are; else the covariance is scaled with the residual variance, as for unweighted
  /// data.
  bool variance_known = true;
};

/// How a fit ended. `at_kink`: no fraction of the step brought a decrease, as at a minimum on a kink of r.
enum class FitStatus { not_run, converged, at_kink, too_many_steps, rank_deficient, infeasible_start };

struct LeastSquaresFit {
  FitStatus status = FitStatus::not_run;
  Vector x;
  /// Inverse of J'WJ + R'R, times the residual variance unless known; empty where rank_deficient.
  Matrix covariance;
  double sum_of_squares = 0;  ///< weighted, the prior's part included
  double residual_sd = 0;     ///< sqrt(sum / (rows - unknowns)); 0 where there are no more rows than unknowns
  int steps = 0;
  [[nodiscard]] bool usable() const { return status == FitStatus::converged || status == FitStatus::at_kink; }
};

/// Minimises from `start`. On NIST StRD Bennett5, Misra1a and DanWood the unknowns agree with the certified
/// values to 1e-9 relative and their sds to 1e-7, from both starts.
[[nodiscard]] LeastSquaresFit minimise(const LeastSquaresProblem& problem, const Vector& start,
                                       const LeastSquaresOptions& options = {});

/// Inverse of A'A for A of full column rank, by QR; empty where it is not.
[[nodiscard]] Matrix inverse_of_squares(const Matrix& a);

}  // namespace scourbook::rating
