#pragma once
// What a derivation is tested by: each with its rule and source, stored with the curve.

#include <vector>

#include "rating/gauging_fit.hpp"
#include "rederivation/derive.hpp"
#include "rederivation/surveyed_control.hpp"

namespace scourbook::rederivation {

struct Derivation {
  const Input& input;
  const std::vector<SurveyedControl>& surveyed;
  const rating::Prior& prior;
  const std::vector<rating::Observation>& used;
  const RatingCurve& curve;                                       ///< fitted
  const std::vector<std::optional<ControlCoefficients>>& before;  ///< as in Result
  const rating::Matrix& covariance;
  double top_m;
};

[[nodiscard]] std::vector<Diagnostic> diagnose(const Derivation& derivation);

// The groups, each appending its own.
void test_held_scale(const Derivation& derivation, std::vector<Diagnostic>& out);
void tell_refined_scale(const Derivation& derivation, std::vector<Diagnostic>& out);
void tell_other_policy(const Derivation& derivation, std::vector<Diagnostic>& out);
void tell_moves(const Derivation& derivation, std::vector<Diagnostic>& out);
void tell_gap_to_section(const Derivation& derivation, std::vector<Diagnostic>& out);
void test_residuals(const Derivation& derivation, std::vector<Diagnostic>& out);
void tell_gaugings(const Derivation& derivation, std::vector<Diagnostic>& out);
void tell_measured_geometry(const Derivation& derivation, std::vector<Diagnostic>& out);

}  // namespace scourbook::rederivation
