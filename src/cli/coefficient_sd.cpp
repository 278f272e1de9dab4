#include "cli/coefficient_sd.hpp"

#include <algorithm>
#include <cmath>
#include <utility>
#include <vector>

namespace scourbook::cli {
namespace {

using Weights = std::vector<std::pair<std::string, double>>;

/// sd of the sum of weighted unknowns.
double sd_of(const RatingCurve& curve, const Weights& weights) {
  const std::size_t n = curve.unknowns.size();
  double variance = 0;
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t j = 0; j < n; ++j) {
      double a = 0, b = 0;
      for (const auto& [name, weight] : weights) {
        if (curve.unknowns[i] == name) a = weight;
        if (curve.unknowns[j] == name) b = weight;
      }
      variance += a * b * curve.covariance[i * n + j];
    }
  }
  return std::sqrt(std::max(0.0, variance));
}

}  // namespace

CoefficientSds coefficient_sds(const RatingCurve& curve, const std::string& control) {
  const auto named = [&](const ControlCoefficients& c) { return c.name == control; };
  const auto found = std::find_if(curve.controls.begin(), curve.controls.end(), named);
  if (found == curve.controls.end()) return {};
  const double log_delta = std::log(found->reference_depth_m);
  Weights offset = {{control + ".dh", 1}, {control + ".e_k", 1}};
  // A carried control keeps its own survey: the level error of the new one is not in it.
  if (found->survey_fate != Fate::carried) offset.emplace_back("e_s", 1);
  return {
      sd_of(curve, {{control + ".ln_v1", 1}}), sd_of(curve, offset),
      sd_of(curve, {{control + ".dc", 1}, {control + ".ec", 1}}),
      sd_of(curve, {{control + ".ln_v1", 1}, {control + ".dc", -log_delta}, {control + ".ec", -log_delta}})};
}

}  // namespace scourbook::cli
