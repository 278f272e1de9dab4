// A curve that descends from another: what is held, what is recomputed, what the new period teaches.

#include "invariants.hpp"

using namespace scourbook;
using namespace made;

namespace {

const std::vector<double> kManyLevels{100.75, 100.85, 101.0, 101.2, 101.5, 101.9, 102.3, 102.8, 103.3, 103.8};

/// Exactly what the parent holds, to the last bit.
void check_held(const ControlCoefficients& now, const ControlCoefficients& parent) {
  CAPTURE(now.name);
  CHECK(now.velocity_scale == parent.velocity_scale);
  CHECK(now.velocity_exponent == parent.velocity_exponent);
  CHECK(now.allowance_h0_m == parent.allowance_h0_m);
  CHECK(now.allowance_c == parent.allowance_c);
  CHECK(now.reference_depth_m == parent.reference_depth_m);
  CHECK(now.scale_fate == Fate::held);
  CHECK(now.allowance_fate == Fate::held);
  CHECK(now.survey_fate == Fate::recomputed);
  CHECK(now.trim_fate == Fate::refitted);
  CHECK(now.survey == "S2");
}

struct Pair {
  Input first, next;
  Result parent;
};

/// Ten gaugings, then the bed fills by 0.4 m.
Pair filled(bool has_crest, bool has_plain, const std::vector<double>& new_levels = {}) {
  Shape before, after;
  before.has_crest = has_crest;
  before.has_plain = has_plain;
  before.roughness_n = 0.036;  // not what the reach row says: calibration must teach it
  after = before;
  after.bed_m += 0.4;
  Pair pair;
  pair.first = first_input(before, exact_gaugings(before, kManyLevels));
  pair.parent = rederivation::derive(pair.first);
  check_invariants(pair.parent);
  pair.next = next_input(pair.first, pair.parent.curve, after, exact_gaugings(after, new_levels));
  return pair;
}

TEST_CASE("held coefficients are the parent's bits, surveyed ones the new survey's, trims small") {
  for (const bool gauged : {false, true}) {
    const Pair pair =
        filled(true, true, gauged ? std::vector<double>{100.95, 101.8, 103.2} : std::vector<double>{});
    const Result result = rederivation::derive(pair.next);
    check_invariants(result);
    const RatingCurve& curve = result.curve;
    CHECK(*curve.parent == 1);
    CHECK(curve.lineage == 1);
    CHECK(curve.inferred == !gauged);
    for (std::size_t k = 0; k < 3; ++k) {
      const ControlCoefficients& parent = pair.parent.curve.controls[k];
      check_held(curve.controls[k], parent);
      CHECK(curve.controls[k].calibrated_in == 1);
      REQUIRE(result.before[k]);
      CHECK(result.before[k]->h0_m == parent.h0_m);
      CHECK(std::abs(curve.controls[k].trim_h0_m) < 0.03);
    }
    CHECK(control(curve, "channel").surveyed_h0_m == Approx(100.4).margin(1e-3));
    CHECK(control(curve, "channel").lowest_point_m == 100.4);
    CHECK(control(curve, "section").surveyed_h0_m == 100.6);
    if (!gauged) {
      CHECK(curve.survey_level_error_m == Approx(0).margin(1e-12));
      CHECK(*curve.gauged_high_m3s == *pair.parent.curve.gauged_high_m3s);
      CHECK(*curve.gauged_low_m3s == *pair.parent.curve.gauged_low_m3s);
    } else {
      CHECK(*curve.gauged_high_m3s < *pair.parent.curve.gauged_high_m3s);
    }
    CHECK(*curve.lineage_high_m3s == *pair.parent.curve.lineage_high_m3s);
  }
}

// The width is the same and the section a power law but for its walls: what is left is the law's misfit.
TEST_CASE("after a fill of 0.4 m the curve from the survey alone is right within the law's misfit") {
  const Pair pair = filled(false, false);
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  Shape after;
  after.bed_m = 100.4;
  after.roughness_n = 0.036;
  const double misfit = *diagnostic(result.curve, "gap_to_section_ln channel").value;
  for (const double level : {100.8, 101.2, 101.9, 102.8, 104.0}) {
    const double gap =
        std::log(rating::evaluate(result.curve, level).discharge_m3s / true_flow(after, level));
    CAPTURE(level, gap, misfit);
    CHECK(std::abs(gap) < misfit);
    // The curve left as it was would be far off.
    CHECK(std::log(rating::evaluate(pair.parent.curve, level).discharge_m3s / true_flow(after, level)) > 0.1);
  }
}

TEST_CASE("covariance of a derivation: the parent's held block to the last bit, the rest follows it") {
  const Pair pair = filled(false, false, {101.2, 102.2, 103.2});
  const Result result = rederivation::derive(pair.next);
  const auto parent = rating::covariance_matrix(pair.parent.curve);
  const auto now = rating::covariance_matrix(result.curve);
  for (int i = 1; i <= 3; ++i) {
    for (int j = 1; j <= 3; ++j) CHECK(now(i, j) == parent(i, j));
  }
  // Trims make up for what is held: the level error against the held offset.
  CHECK(now(0, 2) < 0);
  // What is held is in the bands: wider than the trims alone would make them.
  rating::Matrix trims_alone = now;
  for (int i = 1; i <= 3; ++i) {
    trims_alone.row(i).setZero();
    trims_alone.col(i).setZero();
  }
  // Far above the gaugings nothing makes up for it.
  CHECK(rating::sd_of_unknowns(result.curve, now, 108) >
        rating::sd_of_unknowns(result.curve, trims_alone, 108));
}

TEST_CASE("a grandchild holds what the first curve learned, and names the curve where it was calibrated") {
  const Pair pair = filled(true, true, {100.95, 101.8, 103.2});
  Result child = rederivation::derive(pair.next);
  child.curve.number = 2;
  Shape third;
  third.has_crest = third.has_plain = true;
  third.bed_m = 99.8;
  Input input = next_input(pair.next, child.curve, third);
  input.survey.id = "S3";
  input.parent->curve.number = 2;
  input.parent->survey = pair.next.survey;
  const Result result = rederivation::derive(input);
  check_invariants(result);
  CHECK(result.curve.lineage == 1);
  CHECK(*result.curve.parent == 2);
  for (std::size_t k = 0; k < 3; ++k) {
    const ControlCoefficients& first = pair.parent.curve.controls[k];
    CHECK(result.curve.controls[k].velocity_scale == first.velocity_scale);
    CHECK(result.curve.controls[k].allowance_h0_m == first.allowance_h0_m);
    CHECK(result.curve.controls[k].allowance_c == first.allowance_c);
    CHECK(result.curve.controls[k].reference_depth_m == first.reference_depth_m);
    CHECK(result.curve.controls[k].calibrated_in == 1);
  }
  CHECK(*result.curve.lineage_high_m3s == *pair.parent.curve.lineage_high_m3s);
}

TEST_CASE("the same input gives the same bits") {
  const Pair pair = filled(true, true, {100.95, 101.8, 103.2});
  const Result one = rederivation::derive(pair.next), two = rederivation::derive(pair.next);
  CHECK(one.curve.covariance == two.curve.covariance);
  for (std::size_t k = 0; k < 3; ++k)
    CHECK(one.curve.controls[k].flow_scale == two.curve.controls[k].flow_scale);
  for (std::size_t i = 0; i < one.curve.bands.size(); ++i) {
    CHECK(one.curve.bands[i].sd_ln_q == two.curve.bands[i].sd_ln_q);
  }
}

TEST_CASE("a control that the parent did not have starts from its row; one that has no row now is gone") {
  Pair pair = filled(false, true);
  Shape after;
  after.bed_m = 100.4;
  after.has_crest = true;
  pair.next.reach = reach_of(after);
  pair.next.survey = survey_of("S2", "2019-01-01", after);
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK_FALSE(result.before[0]);
  CHECK(control(result.curve, "section").scale_fate == Fate::fresh);
  CHECK(control(result.curve, "section").velocity_scale == 1);
  check_held(control(result.curve, "channel"), control(pair.parent.curve, "channel"));
  CHECK(says(result.curve.remarks, "section: the parent has no such control; it starts from its reach row"));
  CHECK(says(result.curve.remarks, "the parent's control overbank has no reach row now: it is gone"));
}

TEST_CASE("another flow law, cross-section or part: the control starts from its row") {
  for (const int what : {0, 1, 2}) {
    Pair pair = filled(false, false);
    ReachRow& row = pair.next.reach[0].row;
    if (what == 0) {
      row.law = FlowLaw::chezy;
      row.roughness_n.reset();
      row.chezy_c = 35;
    }
    if (what == 1) {
      row.cross_section = "upstream";
      for (auto& point : pair.next.survey.points) point.cross_section = "upstream";
    }
    if (what == 2) {
      row.part = "deep";
      for (auto& point : pair.next.survey.points) point.part = "deep";
    }
    const Result result = rederivation::derive(pair.next);
    check_invariants(result);
    CHECK_FALSE(result.before[0]);
    const ControlCoefficients& c = result.curve.controls[0];
    CHECK(c.scale_fate == Fate::fresh);
    CHECK(c.allowance_fate == Fate::fresh);
    CHECK(c.velocity_scale == Approx(what == 0 ? 35 * 0.02 : 0.02 / 0.03).epsilon(1e-12));
    CHECK(c.allowance_h0_m == Approx(0).margin(1e-12));
    CHECK(says(result.curve.remarks,
               "channel: flow law, cross-section or part is not the parent's; it starts from its reach row"));
  }
}

TEST_CASE("slope, roughness, meandering or coefficient changed: refused, in words") {
  Pair pair = filled(true, false);
  pair.next.reach[0].row.coefficient = 0.9;
  pair.next.reach[1].row.roughness_n = 0.045;
  pair.next.reach[1].row.meander_factor = 1.15;
  const Result result = rederivation::derive(pair.next);
  CHECK(result.status == Status::refused);
  CHECK(result.refusals ==
        std::vector<std::string>{"section: the reach file says that the scale changed: coefficient 0.9 (was "
                                 "1). Holding it would be wrong; "
                                 "scale it by the rows with --rescale, or correct the reach file",
                                 "channel: the reach file says that the scale changed: roughness_n 0.045 "
                                 "(was 0.03), meander_factor 1.15 "
                                 "(was 1). Holding it would be wrong; scale it by the rows with --rescale, "
                                 "or correct the reach file"});
}

TEST_CASE("rescaled: v1 times new over old row, its sd widened by scale_sd_pct") {
  Pair pair = filled(false, false);
  pair.next.reach[0].row.roughness_n = 0.045;
  pair.next.reach[0].row.scale_sd_pct = 10;
  pair.next.options.rescale = true;
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  const ControlCoefficients& c = result.curve.controls[0];
  const ControlCoefficients& parent = pair.parent.curve.controls[0];
  CHECK(c.velocity_scale == Approx(parent.velocity_scale * 0.030 / 0.045).epsilon(1e-14));
  CHECK(c.allowance_h0_m == parent.allowance_h0_m);
  CHECK(c.scale_fate == Fate::rescaled);
  CHECK(c.allowance_fate == Fate::held);
  const double before = rating::covariance_matrix(pair.parent.curve)(1, 1);
  CHECK(rating::covariance_matrix(result.curve)(1, 1) == Approx(before + 0.01).epsilon(1e-12));
  CHECK(says(result.curve.remarks,
             "channel: velocity scale rescaled by the reach rows: roughness_n 0.045 (was 0.03); its sd grows "
             "by 10 %"));
  // Rows that say the same are held, whether or not --rescale was given.
  pair.next.reach[0].row.roughness_n = 0.030;
  const Result same = rederivation::derive(pair.next);
  CHECK(same.curve.controls[0].scale_fate == Fate::held);
  CHECK(same.curve.controls[0].velocity_scale == parent.velocity_scale);
}

TEST_CASE("hold carried: the scale moves with the new gaugings, the move is told in sds") {
  Shape before, after;
  before.roughness_n = 0.036;
  after.bed_m = 100.4;
  after.roughness_n = 0.045;  // grown over
  const Input first = first_input(before, exact_gaugings(before, kManyLevels));
  const Result parent = rederivation::derive(first);
  Input next = next_input(first, parent.curve, after, exact_gaugings(after, {101.2, 101.8, 102.6, 103.4}));
  next.options.hold = HoldPolicy::carried;
  const Result result = rederivation::derive(next);
  check_invariants(result);
  CHECK(result.curve.hold == HoldPolicy::carried);
  const ControlCoefficients& c = result.curve.controls[0];
  CHECK(c.scale_fate == Fate::refitted);
  CHECK(c.allowance_fate == Fate::refitted);
  CHECK(c.calibrated_in == 0);
  CHECK(c.velocity_scale < parent.curve.controls[0].velocity_scale * 0.97);
  const Diagnostic& move = diagnostic(result.curve, "refined_scale_move_sd channel");
  const double sd = std::sqrt(rating::covariance_matrix(parent.curve)(1, 1));
  CHECK(*move.value ==
        Approx(std::log(c.velocity_scale / parent.curve.controls[0].velocity_scale) / sd).epsilon(1e-6));
  CHECK_FALSE(has_diagnostic(result.curve, "held_scale_score"));
}

TEST_CASE("hold flow-scale is refused in words in this version") {
  Pair pair = filled(false, false);
  pair.next.options.hold = HoldPolicy::flow_scale;
  const Result result = rederivation::derive(pair.next);
  CHECK(result.status == Status::refused);
  CHECK(result.refusals ==
        std::vector<std::string>{
            "--hold flow-scale is not available in this version; velocity-scale and carried are"});
}

TEST_CASE("a parent that is itself poorly known where a new gauging lies must not be held") {
  const Shape before;
  Shape after;
  after.bed_m = 100.4;
  const Input first = first_input(before);  // never gauged
  const Result parent = rederivation::derive(first);
  Input next = next_input(first, parent.curve, after, exact_gaugings(after, {101.2, 102.5}));
  const Result result = rederivation::derive(next);
  CHECK(result.status == Status::refused);
  REQUIRE(result.refusals.size() == 1);
  const std::string begin = "curve 1 is itself poorly known where gauging G21 lies (sd of ln Q ";
  CHECK(result.refusals[0].substr(0, begin.size()) == begin);
  const std::string end =
      ", over 0.15): holding its velocity scale exactly would carry that error on. Either let it be refined "
      "by the new "
      "gaugings with --hold carried, or derive all periods together";
  CHECK(result.refusals[0].substr(result.refusals[0].size() - end.size()) == end);
  next.options.hold = HoldPolicy::carried;
  check_invariants(rederivation::derive(next));
  next.options.hold = HoldPolicy::velocity_scale;
  next.options.without_gaugings = true;  // nothing to compare: the bands say how little is known
  const Result alone = rederivation::derive(next);
  check_invariants(alone);
  CHECK(rating::sd_ln_q(alone.curve, 102) > 0.2);
}

}  // namespace
