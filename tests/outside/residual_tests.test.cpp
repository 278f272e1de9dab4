// The tests of deviations against published examples. A worked example of the tests of a rating curve could
// not be found; these are examples of the same statistics in R. Johnson, Miller and Freund's Probability and
// Statistics for Engineers (second hand), with pages.

#include "rating/residual_tests.hpp"

#include <algorithm>
#include <cmath>
#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>
#include <string>

namespace {

using namespace scourbook::rating;

/// Columns of numbers below a note and a header line.
std::vector<std::vector<double>> read_columns(const std::string& name, std::size_t count) {
  std::ifstream file(std::string(SCOURBOOK_TESTS_DIR) + "/outside/data/" + name);
  REQUIRE(file);
  std::vector<std::vector<double>> columns(count);
  std::string line;
  for (int skipped = 0; std::getline(file, line);) {
    if (line.empty() || skipped++ < 2) continue;
    std::istringstream fields(line);
    std::string field;
    for (auto& column : columns) {
      REQUIRE(std::getline(fields, field, ','));
      column.push_back(std::stod(field));
    }
  }
  return columns;
}

TEST_CASE("sign test: 12 of 14 and 9 of 10, one-sided (p. 448)") {
  CHECK(sign_test_one_sided_p(12, 14) == Approx(0.0065).margin(0.00005));
  CHECK(sign_test_one_sided_p(9, 10) == Approx(0.0107).margin(0.00005));
  CHECK(sign_test_p(12, 14) == Approx(2 * 0.0065).margin(0.0001));
  CHECK(sign_test_p(2, 14) == sign_test_p(12, 14));
}

TEST_CASE("runs: 6 among 10 and 17 (p. 456)") {
  CHECK(*runs_z(6, 10, 17) == Approx(-3.20).margin(0.005));
  CHECK(runs_p(6, 10, 17) < 0.005);
}

TEST_CASE("runs about the median, values equal to it dropped (p. 457)") {
  auto deviations = read_columns("runs_thickness.csv", 1)[0];
  for (double& value : deviations) value = std::round(1000 * (value - 0.250));
  const auto above = std::count_if(deviations.begin(), deviations.end(), [](double v) { return v > 0; });
  const auto below = std::count_if(deviations.begin(), deviations.end(), [](double v) { return v < 0; });
  CHECK(above == 19);
  CHECK(below == 16);
  CHECK(count_runs(deviations) == 27);
  CHECK(*runs_z(27, 19, 16) == Approx(2.98).margin(0.005));
}

// Swed and Eisenhart 1943, limits of runs at 5 % two-sided for ten of each sign: 6 and 16 (from memory).
TEST_CASE("runs: the limits of ten and ten, exact") {
  CHECK(runs_p(6, 10, 10) <= 0.05);
  CHECK(runs_p(7, 10, 10) > 0.05);
  CHECK(runs_p(15, 10, 10) > 0.05);
  CHECK(runs_p(16, 10, 10) <= 0.05);
}

// Mean 5.2 and standard deviation 4.08 are in the companion; the t of 4.03 is from memory.
TEST_CASE("Student's t of paired differences (pp. 259-260)") {
  const auto columns = read_columns("paired_accidents.csv", 2);
  std::vector<double> differences;
  for (std::size_t i = 0; i < columns[0].size(); ++i) differences.push_back(columns[0][i] - columns[1][i]);
  CHECK(*student_t(differences) == Approx(4.03).margin(0.005));
}

TEST_CASE("quantiles of Student's t (tables of the same book)") {
  CHECK(student_quantile(0.975, 8) == Approx(2.306).margin(0.0005));
  CHECK(student_quantile(0.95, 9) == Approx(1.833).margin(0.0005));
  CHECK(student_quantile(0.995, 9) == Approx(3.250).margin(0.0005));
  CHECK(student_quantile(0.975, 11) == Approx(2.201).margin(0.0005));
}

// 3.841 and 18.307: any table of chi-square (from memory).
TEST_CASE("quantiles of chi-square") {
  CHECK(chi_square_quantile(0.95, 1) == Approx(3.841).margin(0.0005));
  CHECK(chi_square_quantile(0.95, 10) == Approx(18.307).margin(0.0005));
}

}  // namespace
