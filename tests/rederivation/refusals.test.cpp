// Inputs that give no curve, each refused in words.

#include "invariants.hpp"

using namespace scourbook;
using namespace made;

namespace {

void check_refused(const Input& input, const std::vector<std::string>& words) {
  const Result result = rederivation::derive(input);
  CHECK(result.status == Status::refused);
  CHECK(result.refusals == words);
}

TEST_CASE("no reach row") {
  Input input = first_input(Shape{});
  input.reach.clear();
  check_refused(input, {"no reach row is in force at the begin of the period; take in a reach file first"});
}

TEST_CASE("more than one section or channel, and two plains of one name") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  Input input = first_input(shape);
  const auto rows = input.reach;
  input.reach.insert(input.reach.end(), rows.begin(), rows.end());
  check_refused(input, {"two overbank controls have the part plain: give their parts different names",
                        "the reach file has more than one section control at this time; one is possible",
                        "the reach file has more than one channel control at this time; one is possible"});
}

TEST_CASE("a row without what its law needs") {
  Input input = first_input(Shape{});
  input.reach[0].row.slope.reset();
  check_refused(input, {"channel: its reach row lacks what flow law manning needs"});
  input = first_input(Shape{});
  input.reach[0].row.roughness_n = std::numeric_limits<double>::quiet_NaN();
  check_refused(input, {"channel: its reach row lacks what flow law manning needs"});
}

TEST_CASE("a range without depth, and a section that is nowhere wet") {
  Input input = first_input(Shape{});
  input.reach[0].row.level_to_m = 99.5;
  check_refused(
      input,
      {"channel (cross-section reach, part main) of survey S1 has no range of levels: it would go from "
       "100.000 m to 99.500 m; give level_from_m and level_to_m in the reach file"});
  Shape shape;
  shape.has_plain = true;
  input = first_input(shape);
  input.reach[1].row.level_from_m = 107;
  input.reach[1].row.level_to_m = 106;
  check_refused(
      input,
      {"overbank (cross-section reach, part plain) of survey S1 has no range of levels: it would go from "
       "107.000 m to 106.000 m; give level_from_m and level_to_m in the reach file"});
  // A part of one vertical wall holds no water.
  input = first_input(Shape{});
  input.survey.points = {
      {"reach", "main", 0, 104, ""}, {"reach", "main", 0, 100, ""}, {"reach", "main", 0, 104, ""}};
  check_refused(input,
                {"channel (cross-section reach, part main) of survey S1 is nowhere wet between 100.000 m and "
                 "104.000 m; "
                 "look at the survey's elevations and at level_from_m and level_to_m in the reach file"});
}

TEST_CASE("a gauging to be left out that the period does not hold") {
  Input input = first_input(Shape{}, exact_gaugings(Shape{}, {101, 102}));
  input.options.leave_out = {"G2", "G9"};
  check_refused(input, {"--leave-out G9: the period holds no such gauging"});
}

TEST_CASE("every fault of the sections is told at once") {
  Shape shape;
  shape.has_crest = shape.has_plain = true;
  Input input = first_input(shape);
  input.reach[0].row.level_to_m = 100.1;
  input.reach[2].row.level_to_m = 103;
  check_refused(input, {"section (cross-section crest, part main) of survey S1 has no range of levels: it "
                        "would go from 100.600 m "
                        "to 100.100 m; give level_from_m and level_to_m in the reach file",
                        "overbank (cross-section reach, part plain) of survey S1 has no range of levels: it "
                        "would go from 104.000 "
                        "m to 103.000 m; give level_from_m and level_to_m in the reach file"});
}

}  // namespace
