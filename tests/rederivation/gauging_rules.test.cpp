// Which gaugings are used, which are left out and why, and how each is written down.

#include "invariants.hpp"

using namespace scourbook;
using namespace made;

namespace {

const std::vector<double> kManyLevels{100.07, 100.13, 100.2, 100.4, 100.6, 101.0, 101.2,
                                      101.5,  101.9,  102.3, 102.8, 103.3, 103.8};

struct Pair {
  Input first, next;
  Result parent;
  Shape after;
};

Pair filled(bool has_crest = false) {
  Pair pair;
  Shape before;
  before.has_crest = has_crest;
  pair.after = before;
  pair.after.bed_m = 100.4;
  auto levels = kManyLevels;
  if (has_crest) levels.erase(levels.begin(), levels.begin() + 5);
  pair.first = first_input(before, exact_gaugings(before, levels));
  pair.parent = rederivation::derive(pair.first);
  check_invariants(pair.parent);
  pair.next = next_input(pair.first, pair.parent.curve, pair.after);
  return pair;
}

const CurveGauging& record(const RatingCurve& curve, const std::string& id) {
  const auto found = std::find_if(curve.gaugings.begin(), curve.gaugings.end(),
                                  [&](const auto& g) { return g.gauging == id; });
  REQUIRE(found != curve.gaugings.end());
  return *found;
}

void offer(Pair& pair, const std::string& id, double level, double flow) {
  pair.next.gaugings.push_back(gauging(id, level, flow));
}

TEST_CASE("a used gauging: level, flows, residual and sd are written down") {
  Pair pair = filled();
  offer(pair, "G21", 102.0, true_flow(pair.after, 102.0) * 1.05);
  pair.next.gaugings[0].version = 3;
  pair.next.gaugings[0].gauging.uncertainty_pct = 10;
  pair.next.gaugings[0].gauging.stage_uncertainty_m = 0.02;
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  const CurveGauging& g = record(result.curve, "G21");
  CHECK(g.use == GaugingUse::used);
  CHECK(g.version == 3);
  CHECK(g.role == "discharge");
  CHECK(g.level_m == 102.0);
  CHECK(g.curve_m3s == rating::evaluate(result.curve, 102.0).discharge_m3s);
  CHECK(*g.residual == Approx(std::log(g.discharge_m3s / g.curve_m3s)).epsilon(1e-12));
  const double slope = rating::log_slope(result.curve, 102.0);
  CHECK(g.sd_ln_q == Approx(std::sqrt(0.05 * 0.05 + 0.03 * 0.03 + std::pow(0.02 * slope, 2))).epsilon(1e-12));
}

TEST_CASE("where a gauging states nothing: 8 % of the discharge (95 %) and 5 mm of stage") {
  Pair pair = filled();
  offer(pair, "G21", 102.0, true_flow(pair.after, 102.0));
  const Result result = rederivation::derive(pair.next);
  const double slope = rating::log_slope(result.curve, 102.0);
  CHECK(record(result.curve, "G21").sd_ln_q ==
        Approx(std::sqrt(0.04 * 0.04 + 0.03 * 0.03 + std::pow(0.005 * slope, 2))).epsilon(1e-12));
}

TEST_CASE("below the offset: flow where the survey leaves none, beyond what level errors explain") {
  Pair pair = filled();
  offer(pair, "G21", 100.2, 1.5);
  offer(pair, "G22", 102.0, true_flow(pair.after, 102.0));
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G21").use == GaugingUse::left_out);
  CHECK(record(result.curve, "G21").reason == "below the offset");
  CHECK_FALSE(record(result.curve, "G21").residual);
  CHECK(record(result.curve, "G22").use == GaugingUse::used);
  CHECK(says(result.curve.remarks,
             "gauging G21 is left out: below the offset (level 100.200 m, 1.5 m3/s; the curve from "
             "the survey alone gives 0 m3/s there)"));
  CHECK(*result.curve.gauged_low_m3s > 1.5);
}

TEST_CASE("a gauging a little below the surveyed offset is used: the level error explains it") {
  Pair pair = filled();
  const double low = pair.parent.curve.controls[0].allowance_h0_m + 100.4 - 0.02;
  offer(pair, "G21", low, 0.05);
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G21").use == GaugingUse::used);
  CHECK(result.curve.controls[0].h0_m <= low - 0.01 + 1e-9);
  CHECK(record(result.curve, "G21").residual);
}

TEST_CASE("far off: beyond 3 sd of levels and of the flow's own uncertainty") {
  Pair pair = filled();
  offer(pair, "G21", 102.0, 10 * true_flow(pair.after, 102.0));  // a decimal point slipped
  offer(pair, "G22", 102.5, true_flow(pair.after, 102.5));
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G21").reason == "far off");
  CHECK(record(result.curve, "G21").residual);
  CHECK(record(result.curve, "G22").use == GaugingUse::used);
  const auto said = [](const std::string& remark) {
    return remark.rfind("gauging G21 is left out: far off (level", 0) == 0;
  };
  CHECK(std::any_of(result.curve.remarks.begin(), result.curve.remarks.end(), said));
}

TEST_CASE("a flow that the curve reaches nowhere within 50 m is far off") {
  Pair pair = filled();
  offer(pair, "G21", 103, 1e9);
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G21").reason == "far off");
  CHECK(result.curve.inferred);
}

// The limit of the shift, worked out from the stored covariance of the parent.
TEST_CASE("the limit of a shift is where it is said to be") {
  const Pair pair = filled();
  const auto input = pair.next;
  const Result alone = rederivation::derive(input);
  const double flow = true_flow(pair.after, 101.5);
  const double level = *rating::level_of(alone.curve, flow);
  const auto covariance = rating::covariance_matrix(alone.curve);
  const auto gradient = rating::offset_gradient(alone.curve, 0, rating::unknowns_of(alone.curve));
  const double slope = rating::log_slope(alone.curve, level);
  const double of_flow = covariance(1, 1) + 0.10 * 0.10 + 0.04 * 0.04 + 0.03 * 0.03;
  const double limit =
      3 * std::sqrt(gradient.dot(covariance * gradient) + 0.005 * 0.005 + of_flow / (slope * slope));
  for (const double side : {-1.0, 1.0}) {
    for (const bool inside : {true, false}) {
      Input tried = input;
      tried.gaugings = {gauging("G21", level + side * limit * (inside ? 0.999 : 1.001), flow)};
      const Result result = rederivation::derive(tried);
      CAPTURE(side, inside);
      REQUIRE(result.status == Status::ok);
      CHECK((record(result.curve, "G21").use == GaugingUse::used) == inside);
    }
  }
}

TEST_CASE("left out by name, and without gaugings at all") {
  Pair pair = filled();
  for (const double level : {101.2, 102.0, 103.0}) {
    offer(pair, "G" + std::to_string(static_cast<int>(10 * level)), level, true_flow(pair.after, level));
  }
  pair.next.options.leave_out = {"G1020"};
  Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G1020").reason == "left out by name");
  CHECK(record(result.curve, "G1012").use == GaugingUse::used);
  pair.next.options.leave_out.clear();
  pair.next.options.without_gaugings = true;
  result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(result.curve.inferred);
  for (const CurveGauging& g : result.curve.gaugings) {
    CHECK(g.use == GaugingUse::left_out);
    CHECK(g.reason == "derived without gaugings");
    CHECK(g.residual);
  }
  CHECK(*result.curve.gauged_high_m3s == *pair.parent.curve.gauged_high_m3s);
}

TEST_CASE("zero flow observed: it keeps the offset up, and is no gauging of flow") {
  Pair pair = filled();
  const Result alone = rederivation::derive(pair.next);
  const double offset = alone.curve.controls[0].h0_m;
  offer(pair, "G21", offset - 0.10, 0);
  Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G21").role == "zero flow");
  CHECK(record(result.curve, "G21").use == GaugingUse::used);
  CHECK_FALSE(record(result.curve, "G21").residual);
  CHECK(record(result.curve, "G21").sd_ln_q == 0);
  CHECK(result.curve.inferred);
  CHECK(result.curve.controls[0].h0_m == Approx(offset).epsilon(1e-12));
  pair.next.gaugings[0].level_m = offset + 0.03;
  result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(result.curve.controls[0].h0_m > offset + 0.025);
  pair.next.gaugings[0].level_m = offset + 0.5;
  result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(record(result.curve, "G21").reason == "far off");
}

TEST_CASE("zero-flow level: a levelled lowest point is taken as such, of the crest where there is one") {
  for (const bool crest : {false, true}) {
    Pair pair = filled(crest);
    pair.next.survey = survey_of("S2", "2019-01-01", pair.after, 0.05);
    pair.next.survey.level_uncertainty_m = 0.05;
    offer(pair, "G21", crest ? 100.6 : 100.4, 0);
    pair.next.gaugings[0].gauging.method = "zero-flow-level";
    const Result result = rederivation::derive(pair.next);
    check_invariants(result);
    CHECK(record(result.curve, "G21").role == "zero-flow level");
    CHECK(record(result.curve, "G21").use == GaugingUse::used);
    // 5 cm too high with sd 5 cm, seen with sd 2 cm: by its share of the variance.
    const double share = 0.05 * 0.05 / (0.05 * 0.05 + 0.01 * 0.01 + 0.02 * 0.02);
    CHECK(result.curve.survey_level_error_m == Approx(-0.05 * share).epsilon(0.02));
  }
}

TEST_CASE("a trim of more than 3 of its prior sds is told") {
  Pair pair = filled();
  for (const double level : {101.0, 101.6, 102.4}) {
    // 15 cm off, all alike: a gauge zero mistaken.
    offer(pair, "G" + std::to_string(static_cast<int>(10 * level)), level + 0.16,
          true_flow(pair.after, level));
  }
  pair.next.survey.level_uncertainty_m = 0.03;
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  const double trim = result.curve.survey_level_error_m;
  REQUIRE(trim > 0.09);
  const std::string begin = "trim e_s moved by +0.";
  const auto said = [&](const std::string& remark) {
    return remark.rfind(begin, 0) == 0 && remark.find(
                                              " of its prior sds: is the survey, the gauge zero or a gauging "
                                              "wrong, or did the scale change?") != std::string::npos;
  };
  CHECK(std::any_of(result.curve.remarks.begin(), result.curve.remarks.end(), said));
}

TEST_CASE("gaugings in bank and over the bank together") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  const Result result = rederivation::derive(
      first_input(shape, exact_gaugings(shape, {100.8, 101.2, 102.0, 103.5, 104.6, 105.2, 105.8})));
  check_invariants(result);
  for (const CurveGauging& g : result.curve.gaugings) {
    CHECK(g.use == GaugingUse::used);
    CHECK(std::abs(*g.residual) < 0.06);
  }
}

}  // namespace
