// Controls that the new survey does not show.

#include "invariants.hpp"

using namespace scourbook;
using namespace made;

namespace {

const std::vector<double> kManyLevels{100.75, 100.85, 101.0, 101.2, 101.5, 101.9, 102.3, 102.8, 103.3, 103.8};

/// The new survey shows the channel only; the parent had crest and plain too.
struct Pair {
  Input first, next;
  Result parent;
};

Pair channel_only(double bed_m, const std::vector<double>& new_levels = {}) {
  Shape before;
  before.has_crest = before.has_plain = true;
  Shape after = before;
  after.bed_m = bed_m;
  Pair pair;
  pair.first = first_input(before, exact_gaugings(before, kManyLevels), 0.02);
  pair.parent = rederivation::derive(pair.first);
  check_invariants(pair.parent);
  pair.next = next_input(pair.first, pair.parent.curve, after, exact_gaugings(after, new_levels));
  auto& points = pair.next.survey.points;
  points.erase(std::remove_if(points.begin(), points.end(),
                              [](const SurveyPoint& p) { return p.cross_section == "crest"; }),
               points.end());
  return pair;
}

TEST_CASE("what the survey lacks is listed, and --carry named as the way on") {
  Pair pair = channel_only(100.3);
  Result result = rederivation::derive(pair.next);
  CHECK(result.status == Status::refused);
  CHECK(result.refusals ==
        std::vector<std::string>{
            "survey S2 does not show section; where the ground there is as it was, keep what the "
            "parent's survey showed with --carry section"});
  auto& points = pair.next.survey.points;
  for (auto& point : points) point.part = "main";
  result = rederivation::derive(pair.next);
  CHECK(result.refusals ==
        std::vector<std::string>{
            "survey S2 does not show section,overbank; where the ground there is as it was, keep what "
            "the parent's survey showed with --carry section,overbank"});
}

TEST_CASE("a first curve has nothing to carry from") {
  Pair pair = channel_only(100.3);
  pair.next.parent.reset();
  const Result result = rederivation::derive(pair.next);
  CHECK(result.status == Status::refused);
  CHECK(result.refusals ==
        std::vector<std::string>{"survey S2 holds no points of section (cross-section crest, part "
                                 "main), and there is no curve to carry it from"});
}

TEST_CASE("a carried crest goes on as it was: the same flow, another survey's name, wider trims") {
  Pair pair = channel_only(100.3);
  pair.next.options.carry = {"section"};
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  const RatingCurve& curve = result.curve;
  CHECK(curve.carried);
  const ControlCoefficients& now = control(curve, "section");
  const ControlCoefficients& before = control(pair.parent.curve, "section");
  CHECK(now.survey_fate == Fate::carried);
  CHECK(now.survey == "S1");
  CHECK(now.surveyed_h0_m == before.surveyed_h0_m);
  CHECK(now.section_coefficient == before.section_coefficient);
  CHECK(now.velocity_scale == before.velocity_scale);
  CHECK(now.allowance_h0_m == before.allowance_h0_m);
  CHECK(now.h0_m == Approx(before.h0_m).epsilon(1e-14));
  CHECK(now.flow_scale == Approx(before.flow_scale).epsilon(1e-13));
  CHECK(control(curve, "channel").survey_fate == Fate::recomputed);
  CHECK(says(curve.remarks, "section is carried from survey S1: it was not surveyed again"));
  // Three times the usual sd of e_k and ec on top of what the parent knew.
  const auto covariance = rating::covariance_matrix(curve),
             parent = rating::covariance_matrix(pair.parent.curve);
  CHECK(covariance(4, 4) ==
        Approx(parent(0, 0) + parent(4, 4) + 2 * parent(0, 4) + 0.03 * 0.03).epsilon(1e-9));
  CHECK(covariance(5, 5) == Approx(parent(5, 5) + 0.06 * 0.06).epsilon(1e-9));
}

TEST_CASE("carried twice: still from the first survey, its level error with it") {
  Pair pair = channel_only(100.3);
  pair.next.options.carry = {"section"};
  Result child = rederivation::derive(pair.next);
  child.curve.number = 2;
  Pair third = channel_only(100.1);
  third.next.parent = rederivation::Parent{child.curve, pair.next.reach, pair.next.survey};
  third.next.survey.id = "S3";
  third.next.options.carry = {"section"};
  const Result result = rederivation::derive(third.next);
  check_invariants(result);
  const ControlCoefficients& now = control(result.curve, "section");
  CHECK(now.survey == "S1");
  CHECK(now.h0_m == Approx(control(pair.parent.curve, "section").h0_m).epsilon(1e-14));
}

TEST_CASE("a new bed above a carried crest is said first and loudly") {
  Pair pair = channel_only(100.9);
  pair.next.options.carry = {"section"};
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  REQUIRE_FALSE(result.curve.remarks.empty());
  CHECK(result.curve.remarks[0] ==
        "THE NEW CHANNEL BED (100.900 m) LIES ABOVE THE CARRIED CREST (100.620 m): the crest is likely "
        "buried or gone; "
        "survey it before this curve is used");
}

TEST_CASE("the level error of the new survey moves what it shows, not what is carried") {
  Pair pair = channel_only(100.3, {101.9, 102.6, 103.4});
  for (auto& point : pair.next.survey.points) point.elevation_m += 0.10;  // the new survey is 10 cm too high
  pair.next.survey.level_uncertainty_m = 0.10;
  pair.next.options.carry = {"section"};
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(result.curve.survey_level_error_m < -0.05);
  CHECK(control(result.curve, "channel").h0_m == Approx(100.3).margin(0.05));
  CHECK(control(result.curve, "section").h0_m ==
        Approx(control(pair.parent.curve, "section").h0_m).margin(0.01));
}

TEST_CASE("--carry of something surveyed, or of nothing that there is") {
  Pair pair = channel_only(100.3);
  pair.next.options.carry = {"section", "channel", "weir"};
  Result result = rederivation::derive(pair.next);
  CHECK(result.status == Status::refused);
  CHECK(result.refusals == std::vector<std::string>{"--carry weir: there is no such control"});
  pair.next.options.carry = {"section", "channel"};
  result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(says(result.curve.remarks, "channel was to be carried, but survey S2 shows it: its points are used"));
  CHECK(control(result.curve, "channel").survey_fate == Fate::recomputed);
}

}  // namespace
