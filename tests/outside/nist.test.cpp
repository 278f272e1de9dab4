// The solver against certified values: NIST Statistical Reference Datasets, nonlinear regression
// (itl.nist.gov/div898/strd/nls), DanWood, Misra1a and Bennett5, each from both of its starts; and its
// covariance against GUM (JCGM 100:2008) example H.3, calibration of a thermometer (data as published,
// results from memory).

#include <catch2/catch.hpp>
#include <fstream>
#include <functional>
#include <sstream>
#include <string>
#include <utility>
#include <vector>

#include "rating/least_squares.hpp"

namespace {

using scourbook::rating::FitStatus;
using scourbook::rating::LeastSquaresFit;
using scourbook::rating::LeastSquaresOptions;
using scourbook::rating::LeastSquaresProblem;
using scourbook::rating::Matrix;
using scourbook::rating::minimise;
using scourbook::rating::Vector;

struct Pairs {
  Vector first, second;
};

/// Two columns of numbers below a note and a header line.
Pairs read_pairs(const std::string& name) {
  std::ifstream file(std::string(SCOURBOOK_TESTS_DIR) + "/outside/data/" + name);
  REQUIRE(file);
  std::vector<std::pair<double, double>> rows;
  std::string line;
  for (int skipped = 0; std::getline(file, line);) {
    if (line.empty() || skipped++ < 2) continue;
    std::istringstream fields(line);
    std::pair<double, double> row;
    char comma = 0;
    REQUIRE(fields >> row.first >> comma >> row.second);
    rows.push_back(row);
  }
  Pairs pairs{Vector(rows.size()), Vector(rows.size())};
  for (std::size_t i = 0; i < rows.size(); ++i) {
    pairs.first(static_cast<Eigen::Index>(i)) = rows[i].first;
    pairs.second(static_cast<Eigen::Index>(i)) = rows[i].second;
  }
  return pairs;
}

/// A model y = f(b, x) with its gradient in b.
struct Model {
  std::function<double(const Vector& b, double x)> value;
  std::function<Vector(const Vector& b, double x)> gradient;
  std::function<bool(const Vector& b)> feasible;
};

LeastSquaresFit fit(const Model& model, const Pairs& data, const Vector& start) {
  LeastSquaresProblem problem;
  problem.residuals = [&](const Vector& b) {
    Vector r(data.first.size());
    for (Eigen::Index i = 0; i < r.size(); ++i) r(i) = data.first(i) - model.value(b, data.second(i));
    return r;
  };
  problem.jacobian = [&](const Vector& b) {
    Matrix j(data.first.size(), b.size());
    for (Eigen::Index i = 0; i < j.rows(); ++i) j.row(i) = -model.gradient(b, data.second(i)).transpose();
    return j;
  };
  problem.feasible = model.feasible;
  LeastSquaresOptions options;
  options.variance_known = false;
  return minimise(problem, start, options);
}

Vector vector_of(std::initializer_list<double> values) {
  Vector v(static_cast<Eigen::Index>(values.size()));
  Eigen::Index i = 0;
  for (const double value : values) v(i++) = value;
  return v;
}

struct Certified {
  Vector unknowns, sds;
  double sum_of_squares, residual_sd;
};

void check(const LeastSquaresFit& result, const Certified& certified) {
  REQUIRE(result.status == FitStatus::converged);
  for (Eigen::Index i = 0; i < certified.unknowns.size(); ++i) {
    CHECK(result.x(i) == Approx(certified.unknowns(i)).epsilon(1e-9));
    CHECK(std::sqrt(result.covariance(i, i)) == Approx(certified.sds(i)).epsilon(1e-7));
  }
  CHECK(result.sum_of_squares == Approx(certified.sum_of_squares).epsilon(1e-9));
  CHECK(result.residual_sd == Approx(certified.residual_sd).epsilon(1e-9));
}

TEST_CASE("NIST StRD DanWood, y = b1 x^b2, from both starts") {
  const Pairs data = read_pairs("nist_danwood.csv");
  const Model model{[](const Vector& b, double x) { return b(0) * std::pow(x, b(1)); },
                    [](const Vector& b, double x) {
                      return vector_of({std::pow(x, b(1)), b(0) * std::pow(x, b(1)) * std::log(x)});
                    },
                    {}};
  const Certified certified{vector_of({7.6886226176E-01, 3.8604055871E+00}),
                            vector_of({1.8281973860E-02, 5.1726610913E-02}), 4.3173084083E-03,
                            3.2853114039E-02};
  check(fit(model, data, vector_of({1, 5})), certified);
  check(fit(model, data, vector_of({0.7, 4})), certified);
}

TEST_CASE("NIST StRD Misra1a, y = b1 (1 - exp(-b2 x)), from both starts") {
  const Pairs data = read_pairs("nist_misra1a.csv");
  const Model model{[](const Vector& b, double x) { return b(0) * (1 - std::exp(-b(1) * x)); },
                    [](const Vector& b, double x) {
                      return vector_of({1 - std::exp(-b(1) * x), b(0) * x * std::exp(-b(1) * x)});
                    },
                    {}};
  const Certified certified{vector_of({2.3894212918E+02, 5.5015643181E-04}),
                            vector_of({2.7070075241E+00, 7.2668688436E-06}), 1.2455138894E-01,
                            1.0187876330E-01};
  check(fit(model, data, vector_of({500, 0.0001})), certified);
  check(fit(model, data, vector_of({250, 0.0005})), certified);
}

// The nearest of these to a rating: a power law whose offset is free.
TEST_CASE("NIST StRD Bennett5, y = b1 (b2 + x)^(-1/b3), from both starts") {
  const Pairs data = read_pairs("nist_bennett5.csv");
  const Model model{[](const Vector& b, double x) { return b(0) * std::pow(b(1) + x, -1 / b(2)); },
                    [](const Vector& b, double x) {
                      const double power = std::pow(b(1) + x, -1 / b(2));
                      return vector_of({power, -b(0) * power / (b(2) * (b(1) + x)),
                                        b(0) * power * std::log(b(1) + x) / (b(2) * b(2))});
                    },
                    [&](const Vector& b) { return b(1) + data.second.minCoeff() > 0 && b(2) > 0; }};
  const Certified certified{vector_of({-2.5235058043E+03, 4.6736564644E+01, 9.3218483193E-01}),
                            vector_of({2.9715175411E+02, 1.2448871856E+00, 2.0272299378E-02}),
                            5.2404744073E-04, 1.8629312528E-03};
  check(fit(model, data, vector_of({-2000, 50, 0.8})), certified);
  check(fit(model, data, vector_of({-1500, 45, 0.85})), certified);
}

TEST_CASE("GUM H.3: covariance of a fitted line, and its uncertainty at a point (results from memory)") {
  const Pairs data =
      read_pairs("gum_h3_thermometer.csv");  // reading, observed correction, both in degrees Celsius
  const Vector from_20 = data.first.array() - 20.0;
  LeastSquaresProblem line;
  line.residuals = [&](const Vector& y) {
    return Vector(data.second - Vector::Constant(11, y(0)) - y(1) * from_20);
  };
  line.jacobian = [&](const Vector&) {
    Matrix j(11, 2);
    j << Vector::Constant(11, -1.0), -from_20;
    return j;
  };
  LeastSquaresOptions options;
  options.variance_known = false;
  const LeastSquaresFit result = minimise(line, Vector::Zero(2), options);
  REQUIRE(result.status == FitStatus::converged);
  const Matrix& v = result.covariance;
  CHECK(result.x(0) == Approx(-0.1712).margin(0.00005));
  CHECK(result.x(1) == Approx(0.00218).margin(0.000005));
  CHECK(std::sqrt(v(0, 0)) == Approx(0.0029).margin(0.00005));
  CHECK(std::sqrt(v(1, 1)) == Approx(0.00067).margin(0.000005));
  CHECK(v(0, 1) / std::sqrt(v(0, 0) * v(1, 1)) == Approx(-0.930).margin(0.0005));
  CHECK(result.residual_sd == Approx(0.0035).margin(0.00005));
  CHECK(result.x(0) + 10 * result.x(1) == Approx(-0.1494).margin(0.00005));
  CHECK(std::sqrt(v(0, 0) + 100 * v(1, 1) + 20 * v(0, 1)) == Approx(0.0041).margin(0.00005));
}

}  // namespace
