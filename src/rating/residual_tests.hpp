#pragma once
// Tests of the deviations of gaugings from a curve: signs, runs, Student's t. Pure statistics.

#include <optional>
#include <vector>

namespace scourbook::rating {

/// Two-sided probability of a split as uneven as `positive` of `count` or more so, for even odds (exact
/// binomial).
[[nodiscard]] double sign_test_p(int positive, int count);

/// One-sided probability of `positive` or more of `count`.
[[nodiscard]] double sign_test_one_sided_p(int positive, int count);

/// Number of runs of equal sign; zeros are passed over.
[[nodiscard]] int count_runs(const std::vector<double>& deviations);
/// Normal deviate of a number of runs among n1 and n2 signs, without continuity correction (Wald and
/// Wolfowitz 1940, from memory). Nothing where n1 or n2 is 0 or the variance is none.
[[nodiscard]] std::optional<double> runs_z(int runs, int n1, int n2);

/// Two-sided probability of a number of runs as far out or more so, the n1 and n2 signs in random order:
/// exact (Swed and Eisenhart 1943, from memory). n1 and n2 at least 1, together at most 500.
[[nodiscard]] double runs_p(int runs, int n1, int n2);

/// Student's t of the mean of `values` against 0, n - 1 degrees of freedom. Nothing for n < 2 or values
/// without spread.
[[nodiscard]] std::optional<double> student_t(const std::vector<double>& values);

/// Quantiles: `p` in (0, 1), `freedom` > 0.
[[nodiscard]] double student_quantile(double p, double freedom);
[[nodiscard]] double chi_square_quantile(double p, double freedom);

}  // namespace scourbook::rating
