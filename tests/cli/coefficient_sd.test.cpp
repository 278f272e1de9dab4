#include "cli/coefficient_sd.hpp"

#include <catch2/catch.hpp>
#include <cmath>

using namespace scourbook;
using namespace scourbook::cli;

TEST_CASE("sds of effective coefficients add what they are sums of, with their covariances") {
  RatingCurve curve;
  ControlCoefficients control;
  control.name = "channel";
  control.reference_depth_m = std::exp(0.5);
  control.survey_fate = Fate::recomputed;
  curve.controls = {control};
  curve.unknowns = {"e_s", "channel.ln_v1", "channel.dh", "channel.dc", "channel.e_k", "channel.ec"};
  curve.covariance.assign(36, 0);
  const double variances[] = {0.0009, 0.01, 0.0004, 0.0025, 0.0001, 0.0004};
  for (std::size_t i = 0; i < 6; ++i) curve.covariance[7 * i] = variances[i];
  curve.covariance[1 * 6 + 3] = curve.covariance[3 * 6 + 1] = 0.002;  // ln v1 with dc

  const CoefficientSds sds = coefficient_sds(curve, "channel");
  CHECK(sds.ln_velocity_scale == Approx(0.1));
  CHECK(sds.h0_m == Approx(std::sqrt(0.0009 + 0.0004 + 0.0001)));
  CHECK(sds.area_exponent == Approx(std::sqrt(0.0029)));
  // ln A = ln v1 - 0.5 (dc + ec)
  CHECK(sds.ln_flow_scale == Approx(std::sqrt(0.01 + 0.25 * 0.0029 - 2 * 0.5 * 0.002)));

  curve.controls[0].survey_fate = Fate::carried;
  CHECK(coefficient_sds(curve, "channel").h0_m == Approx(std::sqrt(0.0004 + 0.0001)));
  CHECK(coefficient_sds(curve, "no such control").h0_m == 0);
}
