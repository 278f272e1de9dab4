#pragma once
// What holds of every derived curve, whatever went in.

#include <Eigen/Eigenvalues>
#include <set>

#include "rating/bands.hpp"
#include "rating/evaluate.hpp"
#include "rating/unknowns.hpp"
#include "stations.hpp"

namespace made {

inline void check_control(const RatingCurve& curve, const ControlCoefficients& c) {
  CAPTURE(c.name);
  for (const double value :
       {c.velocity_scale, c.velocity_exponent, c.allowance_h0_m, c.allowance_c, c.reference_depth_m,
        c.lowest_point_m, c.surveyed_h0_m, c.surveyed_c, c.area_coefficient, c.section_coefficient,
        c.range_from_m, c.range_to_m, c.law_misfit, c.trim_h0_m, c.trim_c, c.h0_m, c.area_exponent,
        c.exponent, c.flow_scale}) {
    CHECK(std::isfinite(value));
  }
  for (const double value :
       {c.velocity_scale, c.reference_depth_m, c.area_coefficient, c.section_coefficient, c.flow_scale}) {
    CHECK(value > 0);
  }
  CHECK(c.range_to_m > c.range_from_m);
  const double level_error = c.survey_fate == Fate::carried ? 0 : curve.survey_level_error_m;
  CHECK(std::abs(c.h0_m - (c.surveyed_h0_m + c.allowance_h0_m + level_error + c.trim_h0_m)) < 1e-12);
  CHECK(c.area_exponent >= 0.5);
  CHECK(std::abs(c.exponent - (c.velocity_exponent + c.area_exponent)) < 1e-12);
  const double moved = c.area_exponent - c.surveyed_c;
  const double scale = c.velocity_scale * c.section_coefficient * std::pow(c.reference_depth_m, -moved);
  CHECK(c.flow_scale == Approx(scale).epsilon(1e-12));
}

inline void check_covariance(const RatingCurve& curve) {
  std::vector<std::string> names;
  for (const auto unknown : rating::unknowns_of(curve)) names.push_back(rating::name_of(curve, unknown));
  CHECK(curve.unknowns == names);
  REQUIRE(curve.covariance.size() == names.size() * names.size());
  const rating::Matrix covariance = rating::covariance_matrix(curve);
  REQUIRE(covariance.allFinite());
  CHECK((covariance - covariance.transpose()).isZero(0));
  // In correlations, so that small variances count as much as large ones.
  rating::Vector sds = covariance.diagonal().cwiseSqrt();
  CHECK(sds.minCoeff() > 0);
  const rating::Matrix correlation =
      sds.cwiseInverse().asDiagonal() * covariance * sds.cwiseInverse().asDiagonal();
  const Eigen::SelfAdjointEigenSolver<rating::Matrix> eigen(correlation, Eigen::EigenvaluesOnly);
  CHECK(eigen.eigenvalues().minCoeff() > -1e-9);
}

inline void check_bands(const RatingCurve& curve) {
  REQUIRE(curve.bands.size() >= 2);
  for (std::size_t i = 0; i < curve.bands.size(); ++i) {
    CHECK(std::isfinite(curve.bands[i].sd_ln_q));
    CHECK(curve.bands[i].sd_ln_q >= curve.model_error);
    if (i > 0) CHECK(curve.bands[i].level_m > curve.bands[i - 1].level_m);
  }
}

inline void check_flow(const RatingCurve& curve) {
  const double cease = rating::cease_to_flow_m(curve);
  double last = 0;
  for (int i = -20; i <= 400; ++i) {
    const double flow = rating::evaluate(curve, cease + 0.025 * i).discharge_m3s;
    CHECK(std::isfinite(flow));
    CHECK(flow >= last * (1 - 1e-12));
    CHECK((flow > 0) == (cease + 0.025 * i > cease));
    last = flow;
  }
}

inline void check_words(const RatingCurve& curve) {
  const std::set<std::string> verdicts{"passed", "failed", "note", "not possible"};
  std::set<std::string> names;
  for (const Diagnostic& d : curve.diagnostics) {
    CAPTURE(d.name);
    CHECK(names.insert(d.name).second);
    CHECK(verdicts.count(d.verdict) == 1);
    CHECK_FALSE(d.text.empty());
    CHECK_FALSE(d.rule.empty());
    CHECK_FALSE(d.source.empty());
    CHECK(std::isfinite(d.value.value_or(0)));
    CHECK(std::isfinite(d.limit.value_or(0)));
    CHECK(d.text.find("nan") == std::string::npos);
    CHECK(d.text.find("inf ") == std::string::npos);
  }
  for (const std::string& remark : curve.remarks) {
    CHECK_FALSE(remark.empty());
    CHECK(remark.find("nan") == std::string::npos);
  }
}

inline void check_invariants(const Result& result) {
  for (const auto& refusal : result.refusals) UNSCOPED_INFO(refusal);
  REQUIRE(result.status == Status::ok);
  CHECK(result.refusals.empty());
  const RatingCurve& curve = result.curve;
  REQUIRE_FALSE(curve.controls.empty());
  CHECK(result.before.size() == curve.controls.size());
  CHECK(curve.reach.size() == curve.controls.size());
  for (std::size_t i = 1; i < curve.controls.size(); ++i) {
    CHECK(curve.controls[i - 1].kind <= curve.controls[i].kind);
  }
  for (const ControlCoefficients& c : curve.controls) check_control(curve, c);
  check_covariance(curve);
  check_bands(curve);
  check_flow(curve);
  check_words(curve);
  for (const CurveGauging& g : curve.gaugings) {
    CAPTURE(g.gauging);
    CHECK(std::isfinite(g.curve_m3s));
    CHECK(std::isfinite(g.residual.value_or(0)));
    CHECK(std::isfinite(g.sd_ln_q));
    CHECK((g.use == GaugingUse::used) == g.reason.empty());
  }
}

}  // namespace made
