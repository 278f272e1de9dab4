#include "rating/residual_tests.hpp"

#include <algorithm>
#include <boost/math/distributions/binomial.hpp>
#include <boost/math/distributions/chi_squared.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <boost/math/special_functions/binomial.hpp>
#include <cmath>

namespace scourbook::rating {

double sign_test_one_sided_p(int positive, int count) {
  if (positive <= 0) return 1;
  const boost::math::binomial distribution(count, 0.5);
  return boost::math::cdf(boost::math::complement(distribution, positive - 1));
}

double sign_test_p(int positive, int count) {
  const int most = std::max(positive, count - positive);
  return std::min(1.0, 2 * sign_test_one_sided_p(most, count));
}

int count_runs(const std::vector<double>& deviations) {
  int runs = 0;
  double last = 0;
  for (const double value : deviations) {
    if (value == 0) continue;
    if (last == 0 || (value > 0) != (last > 0)) ++runs;
    last = value;
  }
  return runs;
}

std::optional<double> runs_z(int runs, int n1, int n2) {
  if (n1 < 1 || n2 < 1) return {};
  const double a = n1, b = n2, n = a + b;
  const double mean = 2 * a * b / n + 1;
  const double variance = 2 * a * b * (2 * a * b - n) / (n * n * (n - 1));
  if (!(variance > 0)) return {};
  return (runs - mean) / std::sqrt(variance);
}

namespace {

double binomial(int n, int k) {
  return k < 0 || k > n
             ? 0
             : boost::math::binomial_coefficient<double>(static_cast<unsigned>(n), static_cast<unsigned>(k));
}

}  // namespace

double runs_p(int runs, int n1, int n2) {
  const double all = binomial(n1 + n2, n1);
  double few = 0, many = 0;
  for (int u = 1; u <= n1 + n2; ++u) {
    const int k = u / 2;
    // u runs are k of either sign, or k and k + 1.
    const double ways = u % 2 == 0 ? 2 * binomial(n1 - 1, k - 1) * binomial(n2 - 1, k - 1)
                                   : binomial(n1 - 1, k - 1) * binomial(n2 - 1, k) +
                                         binomial(n1 - 1, k) * binomial(n2 - 1, k - 1);
    if (u <= runs) few += ways / all;
    if (u >= runs) many += ways / all;
  }
  return std::min(1.0, 2 * std::min(few, many));
}

std::optional<double> student_t(const std::vector<double>& values) {
  if (values.size() < 2) return {};
  const double n = static_cast<double>(values.size());
  double mean = 0, squares = 0;
  for (const double value : values) mean += value / n;
  for (const double value : values) squares += (value - mean) * (value - mean);
  const double sd = std::sqrt(squares / (n - 1));
  if (!(sd > 0)) return {};
  return mean / (sd / std::sqrt(n));
}

double student_quantile(double p, double freedom) {
  return boost::math::quantile(boost::math::students_t(freedom), p);
}

double chi_square_quantile(double p, double freedom) {
  return boost::math::quantile(boost::math::chi_squared(freedom), p);
}

}  // namespace scourbook::rating
