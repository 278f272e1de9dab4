// A first curve: what the survey and the reach rows give, and what gaugings teach.

#include <numeric>

#include "invariants.hpp"

using namespace scourbook;
using namespace made;

namespace {

TEST_CASE("from the survey alone: surveyed law, scale of the reach row, trims and allowances zero") {
  const Shape shape;
  const Result result = rederivation::derive(first_input(shape));
  check_invariants(result);
  const RatingCurve& curve = result.curve;
  CHECK_FALSE(curve.parent);
  CHECK(curve.inferred);
  CHECK_FALSE(curve.gauged_high_m3s);
  CHECK_FALSE(curve.lineage_high_m3s);
  CHECK_FALSE(curve.takeover_level_m);
  CHECK(curve.surveyed_top_m == 104);
  REQUIRE(curve.controls.size() == 1);
  const ControlCoefficients& c = curve.controls[0];
  CHECK(c.velocity_scale == Approx(std::sqrt(0.0004) / 0.03).epsilon(1e-14));
  CHECK(c.velocity_exponent == Approx(2.0 / 3));
  CHECK(c.surveyed_c == Approx(1).epsilon(1e-6));
  CHECK(c.area_coefficient == Approx(40).epsilon(1e-5));
  CHECK(c.surveyed_h0_m == Approx(100).margin(1e-4));
  CHECK(c.lowest_point_m == 100);
  CHECK(c.range_from_m == 100);
  CHECK(c.range_to_m == 104);
  CHECK(std::abs(c.allowance_h0_m) + std::abs(c.allowance_c) + std::abs(c.trim_h0_m) + std::abs(c.trim_c) <
        1e-12);
  CHECK(c.scale_fate == Fate::fresh);
  CHECK(c.allowance_fate == Fate::fresh);
  CHECK(c.survey_fate == Fate::recomputed);
  CHECK(c.trim_fate == Fate::refitted);
  CHECK(c.survey == "S1");
  CHECK(c.calibrated_in == 0);
  CHECK(says(curve.remarks,
             "no gauging in the period: the curve is inferred from the survey and what is held"));
  // Within what the law misses of the section's own conveyance, which is told.
  const double gap = *diagnostic(curve, "gap_to_section_ln channel").value;
  CHECK(gap < 0.06);
  for (const double level : {100.3, 101.0, 102.5, 104.0}) {
    CHECK(std::abs(std::log(rating::evaluate(curve, level).discharge_m3s / true_flow(shape, level))) <=
          gap + 1e-9);
  }
}

TEST_CASE("the reference depth is the geometric mean of the depths of the law") {
  const Result result = rederivation::derive(first_input(Shape{}));
  double sum = 0;
  for (int i = 0; i < 80; ++i)
    sum += std::log(100 + 4 * (0.05 + 0.95 * i / 79) - result.curve.controls[0].surveyed_h0_m);
  CHECK(result.curve.controls[0].reference_depth_m == Approx(std::exp(sum / 80)).epsilon(1e-12));
}

TEST_CASE("gaugings teach the scale: a channel rougher than its row says") {
  Shape shape;
  shape.roughness_n = 0.04;
  const auto gaugings = exact_gaugings(shape, {100.4, 100.8, 101.3, 101.9, 102.4, 103.1, 103.6});
  const Result result = rederivation::derive(first_input(shape, gaugings));
  check_invariants(result);
  const RatingCurve& curve = result.curve;
  CHECK_FALSE(curve.inferred);
  CHECK(*curve.gauged_low_m3s == gaugings.front().gauging.discharge.m3s());
  CHECK(*curve.gauged_high_m3s == gaugings.back().gauging.discharge.m3s());
  CHECK(*curve.lineage_high_m3s == *curve.gauged_high_m3s);
  CHECK(curve.controls[0].velocity_scale == Approx(std::sqrt(0.0004) / 0.04).epsilon(0.05));
  for (const CurveGauging& g : curve.gaugings) CHECK(std::abs(*g.residual) < 0.03);
  CHECK(rating::sd_ln_q(curve, 102) < 0.05);
}

TEST_CASE("ranges that the reach row leaves blank") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  const Result result = rederivation::derive(first_input(shape));
  check_invariants(result);
  const auto& section = control(result.curve, "section");
  CHECK(section.range_from_m == 100.6);
  CHECK(section.range_to_m == Approx(101.2));  // 0.6 m above the lowest point
  const auto& channel = control(result.curve, "channel");
  CHECK(channel.range_from_m == 100);
  CHECK(channel.range_to_m == 105);  // 1 m above the lower end
  const auto& plain = control(result.curve, "overbank");
  CHECK(plain.range_from_m == 104);  // where water gets in
  CHECK(plain.range_to_m == 106);
  CHECK(plain.surveyed_h0_m == 104);
  CHECK(result.curve.surveyed_top_m == 106);
}

TEST_CASE("the channel's range ends with the plain's where that is lower; a low crest's with its top") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  Input input = first_input(shape);
  input.reach[2].row.level_to_m = 104.7;
  input.survey.points.erase(input.survey.points.end() - 1);
  input.survey.points.erase(input.survey.points.end() - 4);
  const Result result = rederivation::derive(input);
  check_invariants(result);
  CHECK(control(result.curve, "channel").range_to_m == 104.7);
  CHECK(control(result.curve, "section").range_to_m == Approx(100.85));
}

TEST_CASE("ranges that the reach row gives") {
  Shape shape;
  shape.has_plain = true;
  Input input = first_input(shape);
  input.reach[0].row.level_from_m = 100.5;
  input.reach[0].row.level_to_m = 103;
  input.reach[1].row.level_from_m = 104.2;
  const Result result = rederivation::derive(input);
  check_invariants(result);
  const auto& channel = control(result.curve, "channel");
  CHECK(channel.range_from_m == 100.5);
  CHECK(channel.range_to_m == 103);
  CHECK(channel.surveyed_h0_m == Approx(100).margin(1e-3));  // the offset stays with the bed
  CHECK(control(result.curve, "overbank").surveyed_h0_m == 104.2);
}

TEST_CASE("controls come in the order section, channel, overbank, whatever the order of the rows") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  Input input = first_input(shape, exact_gaugings(shape, {100.9, 101.4, 102.8}));
  const Result straight = rederivation::derive(input);
  std::reverse(input.reach.begin(), input.reach.end());
  const Result turned = rederivation::derive(input);
  check_invariants(turned);
  CHECK(turned.curve.controls[0].name == "section");
  CHECK(turned.curve.controls[1].name == "channel");
  CHECK(turned.curve.controls[2].name == "overbank");
  CHECK(turned.curve.reach[0].row == 1);
  CHECK(turned.curve.reach[2].row == 3);
  CHECK(turned.curve.covariance == straight.curve.covariance);
}

TEST_CASE("several overbank controls carry the names of their parts") {
  Shape shape;
  shape.has_plain = true;
  Input input = first_input(shape);
  input.reach.push_back(input.reach[1]);
  input.reach[2].row.part = "main";
  input.reach[2].row.level_from_m = 103.9;
  input.reach[2].row.level_to_m = 105;
  const Result result = rederivation::derive(input);
  check_invariants(result);
  CHECK(result.curve.controls[1].name == "overbank plain");
  CHECK(result.curve.controls[2].name == "overbank main");
}

TEST_CASE("section and channel: the takeover is found and stored") {
  Shape shape;
  shape.has_crest = true;
  const Result result =
      rederivation::derive(first_input(shape, exact_gaugings(shape, {100.8, 101, 101.3, 102, 103})));
  check_invariants(result);
  REQUIRE(result.curve.takeover_level_m);
  const double level = *result.curve.takeover_level_m;
  CHECK(rating::evaluate(result.curve, level - 0.05).control == 0);
  CHECK(rating::evaluate(result.curve, level).control == 1);
}

TEST_CASE("a takeover that there is not, and a control that never governs, are said") {
  Shape shape;
  shape.has_crest = true;
  shape.crest_m = 99.0;  // drowned from the first drop
  const Result drowned = rederivation::derive(first_input(shape));
  check_invariants(drowned);
  CHECK_FALSE(drowned.curve.takeover_level_m);
  CHECK(says(
      drowned.curve.remarks,
      "the channel nowhere takes over from the section: the smaller of both flows counts at every level"));
  CHECK(says(drowned.curve.remarks, "section never governs between 100.000 and 104.000 m"));
  shape.crest_m = 102.5;  // a dam
  const Result dam = rederivation::derive(first_input(shape));
  check_invariants(dam);
  CHECK(says(dam.curve.remarks, "channel never governs between 102.500 and 104.000 m"));
}

TEST_CASE("flow that would begin above the surveyed top is said") {
  Shape shape;
  shape.has_crest = true;
  shape.crest_m = 104.5;
  const Result result = rederivation::derive(first_input(shape));
  check_invariants(result);
  CHECK(says(result.curve.remarks, "flow begins at 104.500 m, above the surveyed top 104.000 m"));
}

TEST_CASE("a narrow slot is said, and doubles the sd of dh") {
  Shape shape;
  Input input = first_input(shape);
  const double whole = rating::covariance_matrix(rederivation::derive(input).curve)(2, 2);
  auto& points = input.survey.points;
  points.insert(points.begin() + 2, {{"reach", "main", 6, 100.0, ""},
                                     {"reach", "main", 6, 99.0, ""},
                                     {"reach", "main", 6.01, 99.0, ""},
                                     {"reach", "main", 6.01, 100.0, ""}});
  const Result result = rederivation::derive(input);
  check_invariants(result);
  CHECK(says(
      result.curve.remarks,
      "channel: narrow slot: offset uncertain (the lowest 5 % of its depth hold under 0.1 % of the area)"));
  CHECK(rating::covariance_matrix(result.curve)(2, 2) == Approx(4 * whole).epsilon(1e-9));
}

TEST_CASE("the priors of an unfitted first curve") {
  Shape shape;
  shape.has_crest = true;
  Input input = first_input(shape);
  const auto sds = [&] {
    const Result result = rederivation::derive(input);
    check_invariants(result);
    const auto covariance = rating::covariance_matrix(result.curve);
    std::vector<double> all;
    for (Eigen::Index i = 0; i < covariance.rows(); ++i) all.push_back(std::sqrt(covariance(i, i)));
    return all;
  };
  const std::vector<double> usual{0.03, 0.20, 0.05, 0.15, 0.01, 0.02, 0.30, 0.20, 0.10, 0.01, 0.02};
  const auto found = sds();
  for (std::size_t i = 0; i < usual.size(); ++i) CHECK(found[i] == Approx(usual[i]).epsilon(1e-9));
  input.survey.level_uncertainty_m = 0.08;
  input.reach[0].row.scale_sd_pct = 5;
  input.reach[1].row.scale_sd_pct = 15;
  const auto stated = sds();
  CHECK(stated[0] == Approx(0.08).epsilon(1e-9));
  CHECK(stated[1] == Approx(0.05).epsilon(1e-9));
  CHECK(stated[6] == Approx(0.15).epsilon(1e-9));
}

TEST_CASE("an area exponent below 0.5 is bounded, and that is said") {
  Shape shape;
  // Flows that hardly rise with the level.
  std::vector<GaugingAtLevel> gaugings;
  for (int i = 0; i < 8; ++i)
    gaugings.push_back(gauging("G" + std::to_string(i), 100.5 + 0.4 * i, 12 + 0.5 * i));
  const Result result = rederivation::derive(first_input(shape, gaugings));
  check_invariants(result);
  for (const ControlCoefficients& c : result.curve.controls) {
    const double unbounded = c.surveyed_c + c.allowance_c + c.trim_c;
    const bool bounded = unbounded < 0.5;
    CHECK(says(result.curve.remarks, "channel: the area exponent was bounded below at 0.5") == bounded);
  }
}

}  // namespace
