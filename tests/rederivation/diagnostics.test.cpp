// The diagnostics of a derivation: values against definitions, verdicts against known changes.

#include <Eigen/Cholesky>
#include <random>

#include "invariants.hpp"
#include "rating/gauging_fit.hpp"

using namespace scourbook;
using namespace made;

namespace {

const std::vector<double> kManyLevels{100.2, 100.4, 100.6, 101.0, 101.2, 101.5,
                                      101.9, 102.3, 102.8, 103.3, 103.8};

struct Pair {
  Input first, next;
  Result parent;
  Shape after;
};

/// The bed fills by 0.4 m and the roughness changes by a factor.
Pair changed(double roughness_factor, const std::vector<double>& levels) {
  Pair pair;
  const Shape before;
  pair.after.bed_m = 100.4;
  pair.after.roughness_n = before.roughness_n * roughness_factor;
  pair.first = first_input(before, exact_gaugings(before, kManyLevels));
  pair.parent = rederivation::derive(pair.first);
  check_invariants(pair.parent);
  pair.next = next_input(pair.first, pair.parent.curve, pair.after, exact_gaugings(pair.after, levels));
  return pair;
}

TEST_CASE("a first curve has no held scale to test; no gauging, no test") {
  const Pair pair = changed(1, {});
  CHECK_FALSE(has_diagnostic(pair.parent.curve, "held_scale_score"));
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(diagnostic(result.curve, "held_scale_score").verdict == "not possible");
  CHECK(diagnostic(result.curve, "held_scale_score").text ==
        "the held velocity scale cannot be tested without a gauging");
  CHECK_FALSE(diagnostic(result.curve, "held_scale_score").value);
}

TEST_CASE(
    "an unchanged scale passes; a channel grown rougher by a half is found, with the change it prefers") {
  const std::vector<double> levels{101.2, 102.0, 103.0, 103.6};
  const Result same = rederivation::derive(changed(1, levels).next);
  check_invariants(same);
  CHECK(diagnostic(same.curve, "held_scale_score").verdict == "passed");
  CHECK(std::abs(*diagnostic(same.curve, "preferred_scale_change_pct").value) < 5);
  const Result rougher = rederivation::derive(changed(1.5, levels).next);
  check_invariants(rougher);
  const Diagnostic& score = diagnostic(rougher.curve, "held_scale_score");
  CHECK(score.verdict == "failed");
  CHECK(*score.value > *score.limit);
  CHECK(*score.limit == Approx(3.8415).epsilon(1e-4));  // 95 % of chi-square with one degree
  CHECK(*diagnostic(rougher.curve, "preferred_scale_change_pct").value ==
        Approx(100 * (1 / 1.5 - 1)).margin(4));
  CHECK(diagnostic(rougher.curve, "held_chi_square").verdict == "failed");
  CHECK(*diagnostic(rougher.curve, "detectable_scale_change_pct").value < 50);
  CHECK(score.text.find("SLOPE OR ROUGHNESS MAY HAVE CHANGED") != std::string::npos);
}

// The definition, from the pieces: r and V on the curve before trimming, V of parent, trims and gaugings.
TEST_CASE("score, preferred change and detectable change against their definitions") {
  Pair pair = changed(1.1, {101.2, 102.0, 103.0});
  const Result result = rederivation::derive(pair.next);
  Input without = pair.next;
  without.options.without_gaugings = true;
  const RatingCurve alone = rederivation::derive(without).curve;
  std::vector<rating::Observation> seen;
  for (const auto& g : pair.next.gaugings) {
    rating::Observation o;
    o.level_m = g.level_m;
    o.discharge_m3s = g.gauging.discharge.m3s();
    seen.push_back(o);
  }
  const auto unknowns = rating::unknowns_of(alone);
  const rating::Vector r = rating::residuals(alone, seen);
  const rating::Matrix j = rating::residual_jacobian(alone, seen, unknowns);
  rating::Matrix v = j * rating::covariance_matrix(alone) * j.transpose();
  v.diagonal() += rating::residual_sds(alone, seen).cwiseAbs2();
  const rating::Matrix inverse = v.llt().solve(rating::Matrix::Identity(3, 3));
  const double information = inverse.sum(), weighted = (inverse * r).sum();
  // Linear around the fit there, around the survey alone here: alike to the second order of small trims.
  CHECK(*diagnostic(result.curve, "held_scale_score").value ==
        Approx(weighted * weighted / information).epsilon(0.05));
  const double factor = weighted / information, sd = 1 / std::sqrt(information);
  CHECK(std::log1p(*diagnostic(result.curve, "preferred_scale_change_pct").value / 100) ==
        Approx(factor).epsilon(0.03));
  CHECK(std::log1p(*diagnostic(result.curve, "detectable_scale_change_pct").value / 100) ==
        Approx((1.959964 + 0.841621) * sd).epsilon(0.03));
  CHECK(*diagnostic(result.curve, "held_chi_square").value == Approx(r.dot(inverse * r)).epsilon(0.05));
  CHECK(*diagnostic(result.curve, "held_chi_square").limit ==
        Approx(7.8147).epsilon(1e-4));  // 95 %, three degrees
}

TEST_CASE("the preferred scale is printed for the controls that carried the gaugings") {
  const Result result = rederivation::derive(changed(1.2, {101.2, 102.0, 103.0}).next);
  const Diagnostic& preferred = diagnostic(result.curve, "preferred_scale_change_pct");
  const double held = result.curve.controls[0].velocity_scale;
  char expected[80];
  std::snprintf(expected, sizeof expected, ": channel %.4g instead of %.4g",
                held * (1 + *preferred.value / 100), held);
  CHECK(preferred.text.find(expected) != std::string::npos);
}

// 5 % of false alarms, and 25 % of change found: over many sets of three gaugings.
TEST_CASE("the score test's false alarms and its power over many sets of gaugings") {
  const Shape before;
  std::mt19937 engine(9);
  const auto uniform = [&] { return (static_cast<double>(engine()) + 0.5) / 4294967296.0; };
  const auto normal = [&] {
    return std::sqrt(-2 * std::log(uniform())) * std::cos(6.283185307179586 * uniform());
  };
  const auto noisy = [&](std::vector<GaugingAtLevel> gaugings) {
    for (auto& g : gaugings) {
      g.gauging.discharge = Discharge::from_m3s(g.gauging.discharge.m3s() * std::exp(0.04 * normal()));
      g.level_m += 0.005 * normal();
    }
    return gaugings;
  };
  int alarms = 0, found = 0;
  double expected_power = 0;
  constexpr int kSets = 150;
  for (int set = 0; set < kSets; ++set) {
    const Input first = first_input(before, noisy(exact_gaugings(before, kManyLevels)));
    const Result parent = rederivation::derive(first);
    REQUIRE(parent.status == Status::ok);
    for (const bool rougher : {false, true}) {
      Shape after;
      after.bed_m = 100.4;
      if (rougher) after.roughness_n *= 1.25;
      const auto levels = {100.5 + 0.7 * uniform(), 101.2 + uniform(), 102.2 + 0.8 * uniform()};
      const Result result =
          rederivation::derive(next_input(first, parent.curve, after, noisy(exact_gaugings(after, levels))));
      REQUIRE(result.status == Status::ok);
      const bool failed = diagnostic(result.curve, "held_scale_score").verdict == "failed";
      (rougher ? found : alarms) += failed;
      if (rougher) {
        const double sd =
            std::log1p(*diagnostic(result.curve, "detectable_scale_change_pct").value / 100) / 2.801585;
        expected_power += 0.5 * std::erfc((1.959964 - std::log(1.25) / sd) / std::sqrt(2.0)) / kSets;
      }
    }
  }
  std::printf("score test: false alarms %.3f, 25 %% of roughness found %.3f (the stated sds promise %.3f)\n",
              static_cast<double>(alarms) / kSets, static_cast<double>(found) / kSets, expected_power);
  // Model error r is stated and not in these gaugings: alarms are rarer than 5 %.
  CHECK(alarms <= 0.08 * kSets);
  CHECK(found >= 0.6 * kSets);
  CHECK(std::abs(static_cast<double>(found) / kSets - expected_power) < 0.15);
}

TEST_CASE("moves of offset, exponent, area coefficient and section coefficient") {
  const Pair pair = changed(1, {101.2, 102.0});
  const Result result = rederivation::derive(pair.next);
  const ControlCoefficients& now = result.curve.controls[0];
  const ControlCoefficients& before = pair.parent.curve.controls[0];
  CHECK(*diagnostic(result.curve, "move_h0_m channel").value == now.h0_m - before.h0_m);
  CHECK(*diagnostic(result.curve, "move_c channel").value == now.area_exponent - before.area_exponent);
  CHECK(*diagnostic(result.curve, "move_w_pct channel").value ==
        Approx(100 * (now.area_coefficient / before.area_coefficient - 1)));
  CHECK(*diagnostic(result.curve, "move_f_pct channel").value ==
        Approx(100 * (now.section_coefficient / before.section_coefficient - 1)));
  CHECK(diagnostic(result.curve, "move_h0_m channel").text.find("channel: offset +0.") == 0);
}

TEST_CASE("the gap to the section's own flow is the largest over the law's levels") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  const Result result = rederivation::derive(first_input(shape));
  for (const ControlCoefficients& c : result.curve.controls) {
    const hydraulics::SectionPart whole(first_input(shape).survey.points, c.cross_section, c.part);
    const auto part = c.kind == ControlKind::overbank ? whole.raised_to(c.range_from_m) : whole;
    double gap = 0;
    for (int i = 0; i < 80; ++i) {
      const double level = c.range_from_m + (c.range_to_m - c.range_from_m) * (0.05 + 0.95 * i / 79);
      const auto e = part.at(level);
      const double own = c.law == FlowLaw::critical
                             ? hydraulics::crest_flow(part, level, c.velocity_scale)
                             : c.velocity_scale * e.area_m2 * std::pow(e.hydraulic_radius_m(), 2.0 / 3);
      gap = std::max(gap, std::abs(std::log(rating::control_flow(c, level) / own)));
    }
    CHECK(*diagnostic(result.curve, "gap_to_section_ln " + c.name).value == Approx(gap).epsilon(1e-6));
  }
}

TEST_CASE("tests of deviations: not possible with few gaugings, then with their numbers") {
  const Result few = rederivation::derive(changed(1, {101.2, 102.0}).next);
  for (const char* name : {"signs_p", "runs_p", "student_t"}) {
    CHECK(diagnostic(few.curve, name).verdict == "not possible");
    CHECK_FALSE(diagnostic(few.curve, name).value);
  }
  CHECK(diagnostic(few.curve, "signs_p").text == "test of signs: needs 6 gaugings, there are 2");
  CHECK(diagnostic(few.curve, "student_t").text == "Student's t: needs 3 gaugings, there are 2");
  const Pair pair = changed(1, {});
  const Result many = pair.parent;
  std::vector<const CurveGauging*> used;
  int above = 0;
  for (const CurveGauging& g : many.curve.gaugings) above += *g.residual > 0;
  const auto n = static_cast<int>(many.curve.gaugings.size());
  const Diagnostic& signs = diagnostic(many.curve, "signs_p");
  REQUIRE(signs.value);
  CHECK(signs.verdict == (*signs.value >= 0.05 ? "passed" : "failed"));
  char text[80];
  std::snprintf(text, sizeof text, "signs: %d of %d gaugings lie above the curve", above, n);
  CHECK(signs.text.find(text) == 0);
  double mean = 0, squares = 0;
  for (const CurveGauging& g : many.curve.gaugings) mean += *g.residual / g.sd_ln_q / n;
  for (const CurveGauging& g : many.curve.gaugings) squares += std::pow(*g.residual / g.sd_ln_q - mean, 2);
  CHECK(*diagnostic(many.curve, "student_t").value ==
        Approx(mean / std::sqrt(squares / (n - 1) / n)).epsilon(1e-9));
}

TEST_CASE("zero flows enter none of the tests") {
  Pair pair = changed(1, {101.2, 102.0});
  for (int i = 0; i < 8; ++i) pair.next.gaugings.push_back(gauging("Z" + std::to_string(i), 100.2, 0));
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(diagnostic(result.curve, "signs_p").text == "test of signs: needs 6 gaugings, there are 2");
  CHECK(*diagnostic(result.curve, "held_chi_square").limit == Approx(5.9915).epsilon(1e-4));  // two degrees
  CHECK(*diagnostic(result.curve, "gaugings_used").value == 10);
}

TEST_CASE("number, range and spread of the gaugings") {
  const Pair pair = changed(1, {101.2, 103.0});
  const Result result = rederivation::derive(pair.next);
  CHECK(*diagnostic(result.curve, "gaugings_used").value == 2);
  CHECK(diagnostic(result.curve, "gaugings_used")
            .text.find("2 gaugings used; with a flow: 101.20 to 103.00 m, ") == 0);
  const double cease = result.curve.controls[0].h0_m;
  CHECK(*diagnostic(result.curve, "gauged_spread_pct").value == Approx(100 * 1.8 / (104 - cease)));
}

TEST_CASE("area and width measured with gaugings against the section") {
  Pair pair = changed(1, {101.2, 102.0, 103.0});
  for (auto& g : pair.next.gaugings) {
    g.gauging.area_m2 = 40 * (g.level_m - 100.4) * 1.05;
    g.gauging.width_m = 40 * 0.97;
  }
  Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(*diagnostic(result.curve, "measured_area_ratio").value == Approx(1.05).margin(0.02));
  CHECK(*diagnostic(result.curve, "measured_width_ratio").value == Approx(0.97).epsilon(1e-6));
  CHECK(diagnostic(result.curve, "measured_area_ratio").verdict == "passed");
  for (auto& g : pair.next.gaugings) *g.gauging.area_m2 *= 2;
  result = rederivation::derive(pair.next);
  CHECK(diagnostic(result.curve, "measured_area_ratio").verdict == "failed");
  CHECK(diagnostic(result.curve, "measured_area_ratio").text ==
        "measured area of 3 gaugings: 2.10 times the section's at the same level (median); is another "
        "section meant, or "
        "are survey or datum wrong?");
}

TEST_CASE("what the other policy would give") {
  Pair pair = changed(1.15, {101.2, 102.0, 103.0});
  const Result held = rederivation::derive(pair.next);
  pair.next.options.hold = HoldPolicy::carried;
  const Result carried = rederivation::derive(pair.next);
  double gap = 0;
  const double from = std::max(held.curve.controls[0].h0_m, carried.curve.controls[0].h0_m);
  for (int i = 5; i <= 100; ++i) {
    const double level = from + (104 - from) * i / 100;
    gap = std::max(gap, std::abs(std::log(rating::evaluate(held.curve, level).discharge_m3s /
                                          rating::evaluate(carried.curve, level).discharge_m3s)));
  }
  CHECK(*diagnostic(held.curve, "other_policy_largest_gap_pct").value ==
        Approx(100 * std::expm1(gap)).epsilon(1e-4));
  CHECK(diagnostic(held.curve, "other_policy_largest_gap_pct").text.find("with --hold carried the flows") ==
        0);
}

}  // namespace
