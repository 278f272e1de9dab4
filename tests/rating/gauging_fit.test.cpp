// The fit of unknowns to gaugings: against a closed form, against another way of solving, and its limits.

#include "rating/gauging_fit.hpp"

#include <Eigen/Cholesky>
#include <Eigen/LU>
#include <algorithm>

#include "curves.hpp"
#include "rating/evaluate.hpp"

using namespace scourbook;
using namespace scourbook::rating;

namespace {

using LongVector = Eigen::Matrix<long double, Eigen::Dynamic, 1>;
using LongMatrix = Eigen::Matrix<long double, Eigen::Dynamic, Eigen::Dynamic>;

/// ln Q of a curve of section and channel, written out anew: surveyed values and unknowns in the order of the
/// covariance, min of both flows below the takeover, the channel's above.
struct OwnCurve {
  RatingCurve curve;  ///< surveyed values only
  long double depth_of(const LongVector& x, int k, long double z) const {
    return z - (curve.controls[k].surveyed_h0_m + x(2 + 5 * k) + x(0) + x(4 + 5 * k));
  }
  long double ln_control(const LongVector& x, int k, long double z) const {
    const ControlCoefficients& c = curve.controls[k];
    const long double d = depth_of(x, k, z), moved = x(3 + 5 * k) + x(5 + 5 * k);
    return x(1 + 5 * k) + std::log(static_cast<long double>(c.section_coefficient)) +
           (static_cast<long double>(c.velocity_exponent) + c.surveyed_c) * std::log(d) +
           moved * std::log(d / c.reference_depth_m);
  }
  long double ln_q(const LongVector& x, long double z) const {
    const long double last = ln_control(x, static_cast<int>(curve.controls.size()) - 1, z);
    return curve.controls.size() == 1 ? last : std::min(ln_control(x, 0, z), last);
  }
  long double slope(const LongVector& x, long double z) const {
    const long double step = 1e-7L;
    return (ln_q(x, z + step) - ln_q(x, z - step)) / (2 * step);
  }
};

LongVector all_values(const RatingCurve& curve) {
  const auto unknowns = unknowns_of(curve);
  LongVector x(unknowns.size());
  for (std::size_t i = 0; i < unknowns.size(); ++i)
    x(static_cast<Eigen::Index>(i)) = value_of(curve, unknowns[i]);
  return x;
}

/// Normal equations in long double, numerical derivatives, weights frozen within a step, plain Gauss-Newton.
LongVector solve_otherwise(const OwnCurve& own, const Prior& prior, const std::vector<Observation>& seen,
                           LongMatrix& covariance) {
  const LongMatrix precision = prior.covariance.cast<long double>().inverse();
  const LongVector mean = prior.mean.cast<long double>();
  LongVector x = mean;
  for (int step = 0; step < 200; ++step) {
    LongMatrix normal = precision;
    LongVector right = precision * (mean - x);
    for (const Observation& o : seen) {
      const long double slope = own.slope(x, o.level_m);
      const long double variance = 0.03L * 0.03L + static_cast<long double>(o.sd_ln_q) * o.sd_ln_q +
                                   slope * slope * o.sd_level_m * o.sd_level_m;
      LongVector gradient(x.size());
      for (Eigen::Index j = 0; j < x.size(); ++j) {
        LongVector up = x, down = x;
        up(j) += 1e-7L;
        down(j) -= 1e-7L;
        gradient(j) = (own.ln_q(up, o.level_m) - own.ln_q(down, o.level_m)) / 2e-7L;
      }
      const long double r = std::log(static_cast<long double>(o.discharge_m3s)) - own.ln_q(x, o.level_m);
      normal += gradient * gradient.transpose() / variance;
      right += gradient * (r / variance);
    }
    covariance = normal.inverse();
    const LongVector move = covariance * right;
    x += move;
    if (move.norm() < 1e-15L) break;
  }
  return x;
}

std::vector<Observation> random_gaugings(made::Random& random, const RatingCurve& curve, int count,
                                         double noise) {
  std::vector<Observation> seen;
  for (int i = 0; i < count; ++i) {
    const double level = curve.controls[0].h0_m + random.between(0.3, 2.5);
    const double flow = evaluate(curve, level).discharge_m3s * std::exp(noise * random.normal());
    seen.push_back(made::gauging("G" + std::to_string(i), level, flow));
  }
  return seen;
}

TEST_CASE("forty random fits against normal equations in long double") {
  made::Random random(5);
  for (int round = 0; round < 40; ++round) {
    CAPTURE(round);
    RatingCurve curve = made::one_channel();
    curve.controls[0].surveyed_c = random.between(0.8, 1.8);
    curve.controls[0].section_coefficient = random.between(3, 40);
    refresh(curve, 106);
    RatingCurve truth = curve;
    truth.controls[0].allowance_h0_m = random.between(-0.1, 0.1);
    truth.controls[0].velocity_scale *= std::exp(random.between(-0.3, 0.3));
    refresh(truth, 106);
    const auto seen = random_gaugings(random, truth, 2 + round % 12, 0.05);
    const Prior prior = made::first_prior(curve);
    const GaugingFit fit = fit_gaugings(curve, prior, seen, 106);
    REQUIRE(fit.status == FitStatus::converged);
    LongMatrix covariance;
    const LongVector other = solve_otherwise({curve}, prior, seen, covariance);
    const LongVector found = all_values(fit.curve);
    for (Eigen::Index i = 0; i < other.size(); ++i) {
      CAPTURE(i);
      const auto sd = static_cast<double>(std::sqrt(covariance(i, i)));
      CHECK(std::abs(static_cast<double>(found(i) - other(i))) < 1e-7 * sd);
      for (Eigen::Index j = 0; j < other.size(); ++j) {
        const auto expected = static_cast<double>(covariance(i, j));
        const auto scale = static_cast<double>(std::sqrt(covariance(i, i) * covariance(j, j)));
        CHECK(std::abs(fit.covariance(i, j) - expected) < 1e-6 * scale);
      }
    }
  }
}

TEST_CASE("section and channel together against normal equations in long double") {
  RatingCurve curve = made::three_controls();
  curve.controls.pop_back();
  refresh(curve, 106);
  made::Random random(8);
  std::vector<Observation> seen;
  for (const double level : {100.6, 100.7, 100.85, 101.9, 102.2, 102.6}) {
    seen.push_back(
        made::gauging("G" + std::to_string(seen.size()), level,
                      evaluate(curve, level).discharge_m3s * std::exp(0.1 + 0.03 * random.normal())));
  }
  const Prior prior = made::first_prior(curve);
  const GaugingFit fit = fit_gaugings(curve, prior, seen, 106);
  REQUIRE(fit.status == FitStatus::converged);
  LongMatrix covariance;
  const LongVector other = solve_otherwise({curve}, prior, seen, covariance);
  const LongVector found = all_values(fit.curve);
  for (Eigen::Index i = 0; i < other.size(); ++i) {
    const auto sd = static_cast<double>(std::sqrt(covariance(i, i)));
    CHECK(std::abs(static_cast<double>(found(i) - other(i))) < 1e-7 * sd);
  }
}

// With ln v1 alone free and exact stages the problem is linear: a mean weighted with 1/variance.
TEST_CASE("one free velocity scale: the closed form of a normal mean with a normal prior") {
  const RatingCurve curve = made::one_channel();
  Prior prior = made::first_prior(curve);
  prior.held.assign(6, true);
  prior.held[1] = false;
  std::vector<Observation> seen;
  const double errors[] = {0.11, -0.02, 0.20};
  const double sds[] = {0.04, 0.05, 0.10};
  double weights = 1 / 0.09, weighted = 0;
  for (int i = 0; i < 3; ++i) {
    const double level = 100.5 + i;
    seen.push_back(made::gauging("G", level, evaluate(curve, level).discharge_m3s * std::exp(errors[i])));
    seen.back().sd_ln_q = sds[i];
    seen.back().sd_level_m = 0;
    const double weight = 1 / (sds[i] * sds[i] + 0.03 * 0.03);
    weights += weight;
    weighted += weight * errors[i];
  }
  const GaugingFit fit = fit_gaugings(curve, prior, seen, 106);
  REQUIRE(fit.status == FitStatus::converged);
  const double before = std::log(curve.controls[0].velocity_scale);
  CHECK(std::log(fit.curve.controls[0].velocity_scale) - before == Approx(weighted / weights).epsilon(1e-10));
  // What is held keeps its bits, and its variance adds to that of ln v1 through G.
  CHECK(fit.curve.controls[0].allowance_h0_m == curve.controls[0].allowance_h0_m);
  CHECK(fit.curve.controls[0].allowance_c == curve.controls[0].allowance_c);
  const Matrix jacobian = -residual_jacobian(fit.curve, seen, unknowns_of(curve));
  double variance = 1 / weights;
  for (Eigen::Index j = 0; j < 6; ++j) {
    if (j == 1) continue;
    double g = 0;
    for (Eigen::Index i = 0; i < 3; ++i) g += jacobian(i, j) / (sds[i] * sds[i] + 0.03 * 0.03) / weights;
    variance += g * g * prior.covariance(j, j);
    CHECK(fit.covariance(1, j) == Approx(-g * prior.covariance(j, j)).epsilon(1e-9));
    CHECK(fit.covariance(j, j) == prior.covariance(j, j));
  }
  CHECK(fit.covariance(1, 1) == Approx(variance).epsilon(1e-9));
}

TEST_CASE("without gaugings the curve is what was known, and so is the covariance") {
  const RatingCurve curve = made::three_controls();
  Prior prior = made::first_prior(curve);
  prior.mean(0) = 0.02;
  prior.held[1] = prior.held[2] = true;
  const GaugingFit fit = fit_gaugings(curve, prior, {}, 106);
  REQUIRE(fit.status == FitStatus::converged);
  CHECK(fit.curve.survey_level_error_m == Approx(0.02).epsilon(1e-12));
  CHECK((fit.covariance - prior.covariance).norm() < 1e-14);
}

TEST_CASE("the same bits every time, and the order of gaugings does not matter") {
  made::Random random(21);
  const RatingCurve curve = made::one_channel();
  auto seen = random_gaugings(random, curve, 9, 0.05);
  const Prior prior = made::first_prior(curve);
  const GaugingFit first = fit_gaugings(curve, prior, seen, 106),
                   again = fit_gaugings(curve, prior, seen, 106);
  CHECK(first.curve.controls[0].velocity_scale == again.curve.controls[0].velocity_scale);
  CHECK((first.covariance - again.covariance).isZero(0));
  std::reverse(seen.begin(), seen.end());
  const GaugingFit reversed = fit_gaugings(curve, prior, seen, 106);
  CHECK(reversed.curve.controls[0].velocity_scale ==
        Approx(first.curve.controls[0].velocity_scale).epsilon(1e-11));
  CHECK(reversed.curve.controls[0].h0_m == Approx(first.curve.controls[0].h0_m).epsilon(1e-12));
}

/// A curve with what is held drawn anew, and what follows for the free.
struct Drawn {
  RatingCurve truth;
  std::vector<Observation> seen;
};

// The posterior covariance, held unknowns included, against the errors of many derivations: truth drawn from
// what is known beforehand, gaugings drawn from the truth, the held left at their means.
TEST_CASE("covariance of held and free against the errors of fifteen hundred fits") {
  const RatingCurve curve = made::one_channel();
  Prior prior = made::first_prior(curve);
  prior.covariance /= 900;  // small, so that everything is near to linear
  prior.held[1] = prior.held[2] = prior.held[3] = true;
  const auto link = [&](int i, int j, double correlation) {
    const double value = correlation * std::sqrt(prior.covariance(i, i) * prior.covariance(j, j));
    prior.covariance(i, j) = prior.covariance(j, i) = value;
  };
  link(1, 2, 0.5);
  link(0, 2, -0.6);  // as with marks on fixed ground: the free level error hangs on the held allowance
  const Matrix root = prior.covariance.llt().matrixL();
  const auto unknowns = unknowns_of(curve);
  made::Random random(17);
  Matrix products = Matrix::Zero(6, 6);
  Matrix stated;
  constexpr int kRounds = 1500;
  for (int round = 0; round < kRounds; ++round) {
    Vector z(6);
    for (double& value : z) value = random.normal();
    const Vector drawn = prior.mean + root * z;
    RatingCurve truth = curve;
    for (std::size_t i = 0; i < 6; ++i) set_value(truth, unknowns[i], drawn(static_cast<Eigen::Index>(i)));
    refresh(truth, 106);
    std::vector<Observation> seen;
    for (const double level : {100.6, 101.2, 102.4}) {
      Observation o = made::gauging("G", level, 0);
      o.sd_ln_q = 0.001;
      o.sd_level_m = 0.0002;
      const double at = level + o.sd_level_m * random.normal();  // true level of the reading
      o.discharge_m3s = evaluate(truth, at).discharge_m3s * std::exp(0.002 * random.normal());
      o.sd_ln_q = 0.002;
      seen.push_back(o);
    }
    RatingCurve start = curve;
    start.model_error = 0;
    const GaugingFit fit = fit_gaugings(start, prior, seen, 106);
    REQUIRE(fit.status == FitStatus::converged);
    Vector error(6);
    for (std::size_t i = 0; i < 6; ++i) {
      error(static_cast<Eigen::Index>(i)) =
          value_of(fit.curve, unknowns[i]) - drawn(static_cast<Eigen::Index>(i));
    }
    products += error * error.transpose() / kRounds;
    if (round == 0) stated = fit.covariance;
  }
  for (Eigen::Index i = 0; i < 6; ++i) {
    for (Eigen::Index j = 0; j <= i; ++j) {
      CAPTURE(i, j);
      const double scale = std::sqrt(stated(i, i) * stated(j, j));
      // An estimated correlation of n draws has an sd of at most 1 / sqrt(n), a variance sqrt(2 / n): four of
      // them.
      CHECK(std::abs(products(i, j) - stated(i, j)) < 4 * std::sqrt(2.0 / kRounds) * scale);
    }
  }
  const Eigen::LDLT<Matrix> definite(stated);
  CHECK(definite.isPositive());
}

}  // namespace

namespace {

TEST_CASE(
    "the fit starts from the smallest move that gives every gauging 0.01 m over the control that governs") {
  RatingCurve curve = made::one_channel();
  const Prior prior = made::first_prior(curve);
  const std::vector<Observation> seen{made::gauging("low", 99.90, 0.05), made::gauging("high", 101.5, 12)};
  CHECK_FALSE(is_feasible(curve, seen));
  const RatingCurve start = feasible_start(curve, prior, seen, 106);
  CHECK(is_feasible(start, seen));
  CHECK(start.controls[0].h0_m == Approx(99.89).margin(2e-6));
  // The least squares of moves over variances with a given sum: each in proportion to its variance.
  const double whole = start.controls[0].h0_m - 100;
  const double variances = 0.03 * 0.03 + 0.20 * 0.20 + 0.01 * 0.01;
  CHECK(start.survey_level_error_m == Approx(whole * 0.03 * 0.03 / variances).epsilon(1e-9));
  CHECK(start.controls[0].allowance_h0_m == Approx(whole * 0.20 * 0.20 / variances).epsilon(1e-9));
  CHECK(start.controls[0].trim_h0_m == Approx(whole * 0.01 * 0.01 / variances).epsilon(1e-9));
  CHECK(start.controls[0].velocity_scale == Approx(curve.controls[0].velocity_scale).epsilon(1e-14));
  const GaugingFit fit = fit_gaugings(curve, prior, seen, 106);
  CHECK(fit.status == FitStatus::converged);
  CHECK(is_feasible(fit.curve, seen));
}

TEST_CASE("where it is feasible already the start is what was known") {
  const RatingCurve curve = made::three_controls();
  const Prior prior = made::first_prior(curve);
  const RatingCurve start = feasible_start(curve, prior, {made::gauging("G", 100.9, 5)}, 106);
  CHECK(start.controls[0].h0_m == curve.controls[0].h0_m);
  CHECK(start.survey_level_error_m == 0);
}

TEST_CASE("a gauging below both section and channel moves both, through what they share and each by itself") {
  const RatingCurve curve = made::three_controls();
  const Prior prior = made::first_prior(curve);
  const std::vector<Observation> seen{made::gauging("G", 99.95, 0.02)};
  const RatingCurve start = feasible_start(curve, prior, seen, 106);
  CHECK(start.controls[0].h0_m <= 99.95 - kLeastGaugedDepth);
  CHECK(start.controls[1].h0_m <= 99.95 - kLeastGaugedDepth);
  CHECK(start.controls[2].allowance_h0_m == 0);
  CHECK(is_feasible(start, seen));
}

TEST_CASE("offsets that are all held cannot be moved: said, not forced") {
  const RatingCurve curve = made::one_channel();
  Prior prior = made::first_prior(curve);
  for (const int i : {0, 2, 4}) prior.held[static_cast<std::size_t>(i)] = true;
  const GaugingFit fit = fit_gaugings(curve, prior, {made::gauging("G", 99.9, 0.05)}, 106);
  CHECK(fit.status == FitStatus::infeasible_start);
}

// The section's scale alone is free, and a gauging asks for more flow than the channel lets through.
TEST_CASE("a minimum on the takeover is accepted and the gauging named") {
  RatingCurve curve = made::three_controls();
  curve.controls.pop_back();
  refresh(curve, 106);
  Prior prior = made::first_prior(curve);
  prior.held.assign(11, true);
  prior.held[1] = false;
  const double level = *curve.takeover_level_m - 0.1;
  const double channel = control_flow(curve.controls[1], level),
               section = control_flow(curve.controls[0], level);
  REQUIRE(channel > section);
  const GaugingFit fit = fit_gaugings(curve, prior, {made::gauging("G7", level, 1.5 * channel)}, 106);
  REQUIRE(fit.status == FitStatus::at_kink);
  CHECK(fit.at_takeover == std::vector<std::string>{"G7"});
  CHECK(*fit.curve.takeover_level_m == Approx(level).margin(1e-3));
  CHECK(fit.curve.controls[0].velocity_scale ==
        Approx(curve.controls[0].velocity_scale * channel / section).epsilon(1e-2));
}

TEST_CASE("zero flow observed: nothing below the offset, the height above it over u_z else") {
  const RatingCurve curve = made::three_controls();  // cease-to-flow at the crest, 100.40 m
  Observation dry;
  dry.role = Observation::Role::zero_flow;
  dry.sd_level_m = 0.005;
  dry.level_m = 100.30;
  CHECK(residuals(curve, {dry})(0) == 0);
  CHECK(residual_jacobian(curve, {dry}, unknowns_of(curve)).isZero(0));
  dry.level_m = 100.43;
  CHECK(residuals(curve, {dry})(0) == Approx(0.03).epsilon(1e-9));
  CHECK(residual_sds(curve, {dry})(0) == 0.005);
  const GaugingFit fit = fit_gaugings(curve, made::first_prior(curve), {dry}, 106);
  REQUIRE(fit.status == FitStatus::converged);
  CHECK(fit.curve.controls[0].h0_m > 100.4295);
}

TEST_CASE("a measured level of the lowest point: against lowest point and level error, not the allowance") {
  RatingCurve curve = made::one_channel();
  curve.controls[0].lowest_point_m = 99.95;
  curve.controls[0].allowance_h0_m = 0.08;
  curve.controls[0].trim_h0_m = 0.004;
  curve.survey_level_error_m = 0.02;
  refresh(curve, 106);
  Observation level;
  level.role = Observation::Role::zero_flow_level;
  level.control = 0;
  level.level_m = 100.00;
  level.sd_level_m = 0.02;
  CHECK(residuals(curve, {level})(0) == Approx(100.00 - (99.95 + 0.02 + 0.004)).epsilon(1e-9));
  const auto unknowns = unknowns_of(curve);
  const Matrix jacobian = residual_jacobian(curve, {level}, unknowns);
  CHECK(jacobian(0, 0) == -1);  // e_s
  CHECK(jacobian(0, 2) == 0);   // dh
  CHECK(jacobian(0, 4) == -1);  // e_k
  curve.controls[0].survey_fate = Fate::carried;
  refresh(curve, 106);
  CHECK(residuals(curve, {level})(0) == Approx(100.00 - (99.95 + 0.004)).epsilon(1e-9));
}

TEST_CASE("variance of a gauging: discharge, model error, and stage through a slope that is bounded") {
  const RatingCurve curve = made::one_channel();
  Observation seen = made::gauging("G", 102, 20);
  const double exponent = curve.controls[0].exponent;
  CHECK(residual_sds(curve, {seen})(0) ==
        Approx(std::sqrt(0.04 * 0.04 + 0.03 * 0.03 + std::pow(exponent / 2 * 0.005, 2))).epsilon(1e-12));
  seen.level_m = 100.02;  // slope 93 per metre, bounded at 20
  CHECK(residual_sds(curve, {seen})(0) ==
        Approx(std::sqrt(0.04 * 0.04 + 0.03 * 0.03 + std::pow(20 * 0.005, 2))).epsilon(1e-12));
}

TEST_CASE("the sd of an unknown given the held ones") {
  const RatingCurve curve = made::one_channel();
  Prior prior = made::first_prior(curve);
  prior.covariance(0, 2) = prior.covariance(2, 0) = -0.8 * 0.03 * 0.20;
  CHECK(sds_given_held(prior)(0) == Approx(0.03).epsilon(1e-12));
  prior.held[2] = true;
  const Vector sds = sds_given_held(prior);
  CHECK(sds(0) == Approx(0.03 * 0.6).epsilon(1e-12));  // sqrt(1 - 0.8^2)
  CHECK(sds(2) == 0);
  CHECK(sds(1) == Approx(0.30).epsilon(1e-12));
}

// Rounding of levels must not keep a fit from its end: 4000 m above the datum a level has 1e-12 m.
TEST_CASE("a fit far above the datum ends where the same fit near it does") {
  made::Random random(31);
  for (int round = 0; round < 20; ++round) {
    RatingCurve low = made::one_channel();
    auto seen = random_gaugings(random, low, 8, 0.05);
    const Prior prior = made::first_prior(low);
    const GaugingFit near = fit_gaugings(low, prior, seen, 106);
    for (auto& o : seen) o.level_m += 4000;
    low.controls[0].surveyed_h0_m += 4000;
    refresh(low, 4106);
    const GaugingFit far = fit_gaugings(low, prior, seen, 4106);
    REQUIRE(near.status == FitStatus::converged);
    REQUIRE(far.status == FitStatus::converged);
    CHECK(far.curve.controls[0].velocity_scale ==
          Approx(near.curve.controls[0].velocity_scale).epsilon(1e-9));
    CHECK(far.curve.controls[0].h0_m - 4000 == Approx(near.curve.controls[0].h0_m).epsilon(1e-9));
  }
}

}  // namespace
