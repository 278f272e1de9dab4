// Unknowns of a curve: names, what they make of the effective coefficients, derivatives.

#include "rating/unknowns.hpp"

#include <Eigen/Cholesky>
#include <algorithm>

#include "curves.hpp"
#include "rating/bands.hpp"
#include "rating/evaluate.hpp"

using namespace scourbook;
using namespace scourbook::rating;

namespace {

/// Three controls with every unknown away from zero.
RatingCurve bent() {
  RatingCurve curve = made::three_controls();
  curve.survey_level_error_m = 0.021;
  double shift = 0;
  for (ControlCoefficients& control : curve.controls) {
    shift += 0.004;
    control.allowance_h0_m = 0.05 - shift;
    control.allowance_c = 0.03 + shift;
    control.trim_h0_m = -0.003 + shift;
    control.trim_c = 0.01 - shift;
  }
  refresh(curve, 106);
  return curve;
}

TEST_CASE("the order and the names of the unknowns") {
  RatingCurve curve = made::three_controls();
  curve.controls[2].name = "overbank left";
  std::vector<std::string> names;
  for (const Unknown unknown : unknowns_of(curve)) names.push_back(name_of(curve, unknown));
  CHECK(names == std::vector<std::string>{"e_s", "section.ln_v1", "section.dh", "section.dc", "section.e_k",
                                          "section.ec", "channel.ln_v1", "channel.dh", "channel.dc",
                                          "channel.e_k", "channel.ec", "overbank left.ln_v1",
                                          "overbank left.dh", "overbank left.dc", "overbank left.e_k",
                                          "overbank left.ec"});
}

TEST_CASE("every unknown can be set and is read back, and no other moves") {
  RatingCurve curve = bent();
  const auto unknowns = unknowns_of(curve);
  for (const Unknown unknown : unknowns) {
    CAPTURE(name_of(curve, unknown));
    RatingCurve moved = curve;
    set_value(moved, unknown, 0.0123);
    for (const Unknown other : unknowns) {
      const double expected = other == unknown ? 0.0123 : value_of(curve, other);
      CHECK(value_of(moved, other) == Approx(expected).epsilon(1e-14));
    }
  }
}

TEST_CASE("effective coefficients out of surveyed ones, allowances and trims") {
  const RatingCurve curve = bent();
  for (const ControlCoefficients& c : curve.controls) {
    CAPTURE(c.name);
    CHECK(c.h0_m == Approx(c.surveyed_h0_m + c.allowance_h0_m + 0.021 + c.trim_h0_m).epsilon(1e-15));
    CHECK(c.area_exponent == Approx(c.surveyed_c + c.allowance_c + c.trim_c).epsilon(1e-15));
    CHECK(c.exponent == c.velocity_exponent + c.area_exponent);
    // Q = v1 f d^(b+c) (d/delta)^(dc+ec), c as surveyed.
    const double d = 1.7, moved = c.allowance_c + c.trim_c;
    const double expected = c.velocity_scale * c.section_coefficient *
                            std::pow(d, c.velocity_exponent + c.surveyed_c) *
                            std::pow(d / c.reference_depth_m, moved);
    CHECK(control_flow(c, c.h0_m + d) == Approx(expected).epsilon(1e-13));
  }
}

TEST_CASE("at the reference depth an exponent's allowance changes nothing") {
  RatingCurve curve = made::one_channel();
  const double z = curve.controls[0].h0_m + curve.controls[0].reference_depth_m;
  const double before = evaluate(curve, z).discharge_m3s;
  curve.controls[0].allowance_c = 0.3;
  refresh(curve, 106);
  CHECK(evaluate(curve, z).discharge_m3s == Approx(before).epsilon(1e-14));
}

TEST_CASE("a carried control keeps out of the new survey's level error") {
  RatingCurve curve = bent();
  curve.controls[0].survey_fate = Fate::carried;
  refresh(curve, 106);
  const ControlCoefficients& c = curve.controls[0];
  CHECK(c.h0_m == Approx(c.surveyed_h0_m + c.allowance_h0_m + c.trim_h0_m).epsilon(1e-15));
  const auto unknowns = unknowns_of(curve);
  CHECK(ln_q_gradient(curve, 100.8, unknowns)(0) == 0);
  CHECK(offset_gradient(curve, 0, unknowns)(0) == 0);
  CHECK(offset_gradient(curve, 1, unknowns)(0) == 1);
}

TEST_CASE("the effective area exponent is bounded at 0.5, and no longer follows its unknowns there") {
  RatingCurve curve = made::one_channel();
  curve.controls[0].allowance_c = -0.9;
  refresh(curve, 106);
  CHECK(curve.controls[0].area_exponent == 0.5);
  const auto unknowns = unknowns_of(curve);
  const Vector gradient = ln_q_gradient(curve, 102, unknowns);
  for (Eigen::Index i = 0; i < gradient.size(); ++i) {
    const auto kind = unknowns[static_cast<std::size_t>(i)].kind;
    if (kind == UnknownKind::dc || kind == UnknownKind::ec) CHECK(gradient(i) == 0);
  }
}

TEST_CASE("derivatives of ln Q against central differences, at every kind of level") {
  RatingCurve curve = bent();
  for (const bool carried : {false, true}) {
    curve.controls[0].survey_fate = carried ? Fate::carried : Fate::recomputed;
    refresh(curve, 106);
    const auto unknowns = unknowns_of(curve);
    const double takeover = *curve.takeover_level_m;
    // Section; channel; channel and plain; and just above the takeover, where the one from above counts.
    for (const double z : {100.7, takeover - 0.05, takeover + 0.001, 102.4, 103.5, 105.9}) {
      const Vector gradient = ln_q_gradient(curve, z, unknowns);
      for (std::size_t i = 0; i < unknowns.size(); ++i) {
        CAPTURE(z, name_of(curve, unknowns[i]));
        const double step = 1e-6;
        const auto ln_q = [&](double change) {
          RatingCurve moved = curve;
          set_value(moved, unknowns[i], value_of(curve, unknowns[i]) + change);
          refresh(moved, 106);
          return std::log(evaluate(moved, z).discharge_m3s);
        };
        const double expected = (ln_q(step) - ln_q(-step)) / (2 * step);
        CHECK(gradient(static_cast<Eigen::Index>(i)) == Approx(expected).epsilon(1e-6).margin(1e-8));
      }
    }
  }
}

TEST_CASE("at the takeover the derivatives are the channel's; below cease-to-flow there are none") {
  const RatingCurve curve = bent();
  const auto unknowns = unknowns_of(curve);
  const Vector at = ln_q_gradient(curve, *curve.takeover_level_m, unknowns);
  CHECK(at(1) == 0);  // section.ln_v1
  CHECK(at(6) == 1);  // channel.ln_v1
  CHECK(ln_q_gradient(curve, 100.1, unknowns).isZero(0));
}

TEST_CASE("the covariance is stored symmetric to the last bit and comes back") {
  RatingCurve curve = made::one_channel();
  Matrix covariance = Matrix::Random(6, 6);
  covariance = covariance * covariance.transpose();
  covariance(2, 1) *= 1 + 1e-15;
  store_covariance(curve, covariance);
  CHECK(curve.unknowns.size() == 6);
  const Matrix back = covariance_matrix(curve);
  CHECK((back - back.transpose()).isZero(0));
  CHECK((back - covariance).norm() < 1e-14);
}

TEST_CASE("band table: rising levels, both sides of every kink, model error inside") {
  RatingCurve curve = bent();
  const Matrix covariance = made::first_prior(curve).covariance;
  const auto bands = band_table(curve, covariance, 106);
  REQUIRE(bands.size() >= 2);
  CHECK(bands.front().level_m == Approx(cease_to_flow_m(curve) + 0.01).epsilon(1e-12));
  CHECK(bands.back().level_m == Approx(106).epsilon(1e-12));
  for (std::size_t i = 1; i < bands.size(); ++i) CHECK(bands[i].level_m > bands[i - 1].level_m);
  const auto has = [&](double level) {
    return std::any_of(bands.begin(), bands.end(), [&](const BandPoint& p) { return p.level_m == level; });
  };
  CHECK(has(*curve.takeover_level_m));
  CHECK(has(curve.controls[2].h0_m));
  const auto unknowns = unknowns_of(curve);
  for (const BandPoint& point : bands) {
    const Vector g = ln_q_gradient(curve, point.level_m, unknowns);
    const double expected = std::sqrt(g.dot(covariance * g) + 0.03 * 0.03);
    CHECK(point.sd_ln_q == Approx(std::min(3.0, expected)).epsilon(1e-12));
    CHECK(point.sd_ln_q >= 0.03);
  }
}

// Linear propagation against what it stands for: the spread of ln Q over draws of the unknowns.
TEST_CASE("sd of ln Q against a Monte Carlo run") {
  const RatingCurve curve = bent();
  Matrix covariance = made::first_prior(curve).covariance / 400;  // small, so that ln Q is near to linear
  covariance(2, 6) = covariance(6, 2) = 0.3 * std::sqrt(covariance(2, 2) * covariance(6, 6));
  const auto unknowns = unknowns_of(curve);
  const Matrix root = covariance.llt().matrixL();
  made::Random random(3);
  const std::vector<double> levels{100.9, 102.2, 104.5};
  std::vector<double> sums(3, 0), squares(3, 0);
  constexpr int kDraws = 4000;
  for (int draw = 0; draw < kDraws; ++draw) {
    Vector z(covariance.rows());
    for (double& value : z) value = random.normal();
    const Vector move = root * z;
    RatingCurve moved = curve;
    for (std::size_t i = 0; i < unknowns.size(); ++i) {
      set_value(moved, unknowns[i], value_of(curve, unknowns[i]) + move(static_cast<Eigen::Index>(i)));
    }
    refresh(moved, 106);
    for (std::size_t k = 0; k < levels.size(); ++k) {
      const double ln_q = std::log(evaluate(moved, levels[k]).discharge_m3s);
      sums[k] += ln_q;
      squares[k] += ln_q * ln_q;
    }
  }
  for (std::size_t k = 0; k < levels.size(); ++k) {
    const double mean = sums[k] / kDraws;
    const double sd = std::sqrt(squares[k] / kDraws - mean * mean);
    // The sd of an sd of n draws is 1 / sqrt(2 n) of it: four of them, and 1 % for what is not linear.
    CHECK(sd_of_unknowns(curve, covariance, levels[k]) ==
          Approx(sd).epsilon(4 / std::sqrt(2.0 * kDraws) + 0.01));
  }
}

}  // namespace
