#include "rating/bands.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>

#include "rating/evaluate.hpp"
#include "rating/unknowns.hpp"

namespace scourbook::rating {
namespace {

std::vector<double> band_levels(const RatingCurve& curve, double top_m) {
  constexpr int kSteps = 150;
  constexpr double kLowest = 0.01;  // m above cease-to-flow
  constexpr double kBeside = 1e-6;  // m below a kink
  const double cease = cease_to_flow_m(curve);
  const double depth = std::max(top_m - cease, 10 * kLowest);
  std::vector<double> levels;
  for (int i = 0; i <= kSteps; ++i) {
    levels.push_back(cease + kLowest * std::pow(depth / kLowest, static_cast<double>(i) / kSteps));
  }
  std::vector<double> kinks;
  if (curve.takeover_level_m) kinks.push_back(*curve.takeover_level_m);
  for (const ControlCoefficients& control : curve.controls) {
    if (control.kind == ControlKind::overbank) kinks.push_back(control.h0_m);
  }
  const double first = levels.front();
  const double last = levels.back();
  for (const double kink : kinks) {
    if (kink - kBeside <= first || kink >= last) continue;
    levels.push_back(kink - kBeside);
    levels.push_back(kink);
  }
  std::sort(levels.begin(), levels.end());
  const auto too_close = [](double a, double b) { return b - a < 1e-7; };
  levels.erase(std::unique(levels.begin(), levels.end(), too_close), levels.end());
  return levels;
}

}  // namespace

double sd_of_unknowns(const RatingCurve& curve, const Matrix& covariance, double level_m) {
  const Vector g = ln_q_gradient(curve, level_m, unknowns_of(curve));
  return std::min(kLargestSd, std::sqrt(std::max(0.0, g.dot(covariance * g))));
}

std::vector<BandPoint> band_table(const RatingCurve& curve, const Matrix& covariance, double top_m) {
  std::vector<BandPoint> table;
  for (const double level : band_levels(curve, top_m)) {
    const double sd = std::hypot(sd_of_unknowns(curve, covariance, level), curve.model_error);
    table.push_back({level, std::min(sd, kLargestSd)});
  }
  return table;
}

Matrix covariance_matrix(const RatingCurve& curve) {
  const auto n = static_cast<Eigen::Index>(curve.unknowns.size());
  assert(curve.covariance.size() == curve.unknowns.size() * curve.unknowns.size());
  return Eigen::Map<const Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, Eigen::RowMajor>>(
      curve.covariance.data(), n, n);
}

void store_covariance(RatingCurve& curve, const Matrix& covariance) {
  curve.unknowns.clear();
  for (const Unknown unknown : unknowns_of(curve)) curve.unknowns.push_back(name_of(curve, unknown));
  curve.covariance.clear();
  for (Eigen::Index i = 0; i < covariance.rows(); ++i) {
    // The mean of both halves: symmetric to the last bit, whatever the order of the products was.
    for (Eigen::Index j = 0; j < covariance.cols(); ++j) {
      curve.covariance.push_back((covariance(i, j) + covariance(j, i)) / 2);
    }
  }
}

}  // namespace scourbook::rating
