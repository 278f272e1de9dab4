// Marks on fixed ground tie two surveys together.

#include "rederivation/level_marks.hpp"

#include "invariants.hpp"

using namespace scourbook;
using namespace made;

namespace {

const std::vector<double> kManyLevels{100.4, 100.6, 101.0, 101.2, 101.5, 101.9, 102.3, 102.8, 103.3, 103.8};

/// Bench marks at 105 m and up, `error_m` too high, each a little off by itself.
void add_marks(Survey& survey, double error_m, const std::vector<double>& own) {
  for (std::size_t i = 0; i < own.size(); ++i) {
    const double z = 105 + static_cast<double>(i) + error_m + own[i];
    survey.points.push_back({"marks", "main", static_cast<double>(i), z, "BM" + std::to_string(i + 1)});
  }
}

struct Pair {
  Input first, next;
  Result parent;
  Shape after;
};

Pair surveys_off(double first_error, double next_error) {
  Pair pair;
  const Shape before;
  pair.after.bed_m = 100.4;
  pair.first = first_input(before, exact_gaugings(before, kManyLevels), first_error);
  pair.first.survey.level_uncertainty_m = 0.05;
  add_marks(pair.first.survey, first_error, {0, 0, 0});
  pair.parent = rederivation::derive(pair.first);
  check_invariants(pair.parent);
  pair.next = next_input(pair.first, pair.parent.curve, pair.after, {}, next_error);
  pair.next.survey.level_uncertainty_m = 0.05;
  return pair;
}

TEST_CASE("the shift is the median, its sd the spread over the root of the count, at least 1 cm") {
  Survey before = survey_of("S1", "2015-01-01", Shape{}), now = survey_of("S2", "2019-01-01", Shape{});
  CHECK_FALSE(rederivation::mark_shift(before, now));
  add_marks(before, 0, {0, 0, 0, 0});
  CHECK_FALSE(rederivation::mark_shift(before, now));
  add_marks(now, 0.07, {0, 0.001, -0.001, 0.002});
  auto shift = *rederivation::mark_shift(before, now);
  CHECK(shift.count == 4);
  CHECK(shift.shift_m == Approx(0.0705).epsilon(1e-9));
  CHECK(shift.sd_m == 0.01);
  now = survey_of("S2", "2019-01-01", Shape{});
  add_marks(now, 0.07, {0, 0.06, -0.06});
  shift = *rederivation::mark_shift(before, now);
  CHECK(shift.count == 3);
  CHECK(shift.shift_m == Approx(0.07).epsilon(1e-9));
  CHECK(shift.sd_m == Approx(0.06 / std::sqrt(3.0)).epsilon(1e-9));  // spread: sd with n - 1
  CHECK(shift.largest_gap_m == Approx(0.06).epsilon(1e-9));
  now.id = "S1";
  CHECK_FALSE(rederivation::mark_shift(before, now));
}

TEST_CASE("marks of one name on two cross-sections are two marks") {
  Survey before = survey_of("S1", "2015-01-01", Shape{}), now = survey_of("S2", "2019-01-01", Shape{});
  before.points.push_back({"bridge", "main", 0, 106, "BM1"});
  now.points.push_back({"reach", "main", 99, 107, "BM1"});
  CHECK_FALSE(rederivation::mark_shift(before, now));
}

TEST_CASE("a new survey 9 cm against the old one is put right by marks, without any gauging") {
  Pair pair = surveys_off(0.04, -0.05);
  const Result without = rederivation::derive(pair.next);
  add_marks(pair.next.survey, -0.05, {0, 0, 0});
  const Result with = rederivation::derive(pair.next);
  check_invariants(with);
  CHECK(says(with.curve.remarks,
             "3 marks on fixed ground: survey S2 lies -0.090 m against survey S1 (sd 0.010 m); "
             "taken out"));
  const double expected = pair.parent.curve.survey_level_error_m + 0.09;
  CHECK(with.curve.survey_level_error_m == Approx(expected).margin(1e-9));
  // dh and e_s of the parent together put its curve right; so the new one is.
  for (const double level : {100.8, 101.2, 102.0}) {
    const double truth = true_flow(pair.after, level);
    const double gap = std::abs(std::log(rating::evaluate(with.curve, level).discharge_m3s / truth));
    CHECK(gap < 0.05);
    CHECK(gap < std::abs(std::log(rating::evaluate(without.curve, level).discharge_m3s / truth)));
    CHECK(rating::sd_ln_q(with.curve, level) < rating::sd_ln_q(without.curve, level));
  }
}

TEST_CASE("a mark that moved is told, and the median is not misled") {
  Pair pair = surveys_off(0, 0.03);
  add_marks(pair.next.survey, 0.03, {0, 0.20, 0});
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(result.curve.survey_level_error_m ==
        Approx(pair.parent.curve.survey_level_error_m - 0.03).margin(1e-9));
  CHECK(says(result.curve.remarks, "mark BM2 is 0.200 m off the others: did it move, or is it another one?"));
}

TEST_CASE("a derivation from the parent's own survey keeps its level error") {
  Pair pair = surveys_off(0.04, 0);
  pair.next.survey = pair.first.survey;
  const Result result = rederivation::derive(pair.next);
  check_invariants(result);
  CHECK(result.curve.survey_level_error_m == Approx(pair.parent.curve.survey_level_error_m).margin(1e-12));
  CHECK(says(result.curve.remarks, "survey S1 is the parent's own: its level error goes on"));
}

}  // namespace
