#include "history/derivation_input.hpp"

#include <catch2/catch.hpp>

#include "book_fixture.hpp"

using namespace book_fixture;
using history::collect;
using history::DerivationRequest;

namespace {

using Lines = std::vector<std::string>;

DerivationRequest request(const std::string& from, const std::string& until = "") {
  DerivationRequest made;
  made.station = "H-1";
  made.survey = "S1";
  made.from = at(from);
  if (!until.empty()) made.until = at(until);
  return made;
}

struct Ground : Fixture {
  Ground() {
    add(zero("2018-01-01T00:00Z", 99.5));
    add(survey("S1", "2018-06-01T00:00Z"));
    add(reach("2018-01-01T00:00Z", ControlKind::channel, "CS1"));
    add(gauging("G1", "2019-02-01T10:00Z", 1.2, 8));
    add(gauging("G2", "2019-06-01T10:00Z", 2.0, 30));
    add(gauging("G3", "2020-03-01T10:00Z", 1.5, 12));
  }
};

std::vector<std::string> ids(const history::DerivationInput& found) {
  std::vector<std::string> all;
  for (const auto& gauging : found.input.gaugings) all.push_back(gauging.gauging.id);
  return all;
}

std::vector<store::Book::ReachId> rows(const std::vector<ReachRow>& reaches) {
  std::vector<store::Book::ReachId> all;
  for (const auto& row : reaches) {
    Stored<ReachRow> stored;
    stored.value = row;
    all.push_back({static_cast<std::int64_t>(all.size()) + 1, stored});
  }
  return all;
}

std::vector<std::int64_t> in_force(const std::vector<ReachRow>& reaches, const std::string& time) {
  std::vector<std::int64_t> numbers;
  for (const auto& row : history::reach_in_force(rows(reaches), at(time))) numbers.push_back(row.id.row);
  return numbers;
}

}  // namespace

TEST_CASE(
    "a first curve: survey, reach row and the gaugings whose middle lies in the period, with their levels") {
  Ground ground;
  auto long_one = gauging("G4", "2019-12-31T23:00Z", 1.0, 5);
  long_one.end = at("2020-01-01T01:00Z");
  long_one.stage_end = Stage::from_metres(1.01);
  ground.add(long_one);
  ground.add(StageCorrection{"H-1", at("2019-05-01T00:00Z"), at("2019-07-01T00:00Z"),
                             HeightChange::from_metres(0.02), HeightChange::from_metres(0.02), ""});
  const auto found = collect(ground.book, request("2019-01-01T00:00Z", "2020-01-01T00:00Z"));
  CHECK(found.refusals.empty());
  CHECK(found.notes.empty());
  CHECK_FALSE(found.input.parent);
  CHECK(found.input.survey.id == "S1");
  CHECK(found.input.survey.points.size() == 3);
  REQUIRE(found.input.reach.size() == 1);
  CHECK(found.input.reach[0].row.cross_section == "CS1");
  CHECK(ids(found) == Lines{"G1", "G2"});  // the middle of G4 is the first moment after the period
  CHECK(found.input.gaugings[0].level_m == 100.7);
  CHECK(found.input.gaugings[1].level_m == 101.52);
  const auto after = collect(ground.book, request("2020-01-01T00:00Z"));
  CHECK(ids(after) == Lines{"G4", "G3"});
  CHECK(after.input.gaugings[0].level_m == 100.505);
}

TEST_CASE("what is missing is refused in words, all of it") {
  Ground ground;
  ground.add(gauging("G0", "2017-06-01T10:00Z", 1.0, 5));
  auto asked = request("2017-01-01T00:00Z", "2016-01-01T00:00Z");
  asked.survey = "S2";
  asked.options.leave_out = {"G9"};
  CHECK(collect(ground.book, asked).refusals ==
        Lines{"the period ends at 2016-01-01T01:00:00+01:00, not after its begin 2017-01-01T01:00:00+01:00",
              "station H-1 has no survey S2; did you mean S1?",
              "no reach row of station H-1 is in force at 2017-01-01T01:00:00+01:00: take in one with "
              "valid_from no "
              "later than that",
              "gauging G9, to be left out, is not one of this period"});
  CHECK(
      collect(ground.book, request("2017-01-01T00:00Z", "2018-01-01T00:00Z")).refusals.back() ==
      "gauging G0 of 2017-06-01T11:00:00+01:00 has no level: take in a gauge zero valid from then or before");
  asked.station = "H-7";
  CHECK_THROWS_WITH(collect(ground.book, asked), "there is no station H-7");
}

TEST_CASE("the parent is the curve in force just before, a named one, or none") {
  Ground ground;
  ground.add_curve("2019-01-01T00:00Z", {}, {"G1", "G2"});
  ground.add_curve("2020-01-01T00:00Z", 1, {});

  SECTION("none in force: a first curve, and said so") {
    const auto found = collect(ground.book, request("2020-01-01T00:00Z"));
    CHECK(found.refusals.empty());
    CHECK_FALSE(found.input.parent);
    CHECK(found.notes ==
          Lines{"no curve of station H-1 was in force before 2020-01-01T01:00:00+01:00: this is a first "
                "curve and starts a lineage; --descends-from N names a parent"});
  }
  SECTION("a proposal may be named") {
    auto asked = request("2020-01-01T00:00Z");
    asked.descends_from = 2;
    const auto found = collect(ground.book, asked);
    CHECK(found.refusals.empty());
    REQUIRE(found.input.parent);
    CHECK(found.input.parent->curve.number == 2);
    CHECK(found.input.parent->survey->id == "S1");
    REQUIRE(found.input.parent->reach.size() == 1);
    CHECK(found.input.parent->reach[0].row.cross_section == "CS1");
  }
  SECTION("in force just before, never one that starts there") {
    ground.add({period(1, "2019-01-01T00:00Z", "2020-01-01T00:00Z"), period(2, "2020-01-01T00:00Z", "")});
    const auto found = collect(ground.book, request("2020-01-01T00:00Z"));
    CHECK(found.refusals.empty());
    CHECK(found.notes.empty());
    CHECK(found.input.parent->curve.number == 1);
    CHECK(collect(ground.book, request("2020-01-01T00:00:00.001Z")).input.parent->curve.number == 2);
    CHECK_FALSE(collect(ground.book, request("2019-01-01T00:00Z", "2019-01-02T00:00Z")).input.parent);
  }
  SECTION("a time without a curve is looked past, and said so") {
    ground.add({period(1, "2019-01-01T00:00Z", "2019-11-01T00:00Z"),
                period({}, "2019-11-01T00:00Z", "2020-01-01T00:00Z")});
    const auto found = collect(ground.book, request("2020-01-01T00:00Z"));
    CHECK(found.input.parent->curve.number == 1);
    CHECK(found.notes ==
          Lines{"no curve was in force just before 2020-01-01T01:00:00+01:00: the parent is curve 1, "
                "the last before"});
  }
  SECTION("a new lineage") {
    ground.add({period(1, "2019-01-01T00:00Z", "")});
    auto asked = request("2020-01-01T00:00Z");
    asked.first = true;
    const auto found = collect(ground.book, asked);
    CHECK_FALSE(found.input.parent);
    CHECK(found.notes.empty());
    asked.descends_from = 1;
    CHECK(collect(ground.book, asked).refusals ==
          Lines{"--first starts a new lineage and --descends-from names a parent: give one of them"});
  }
  SECTION("one that does not exist") {
    auto asked = request("2020-01-01T00:00Z");
    asked.descends_from = 8;
    CHECK(collect(ground.book, asked).refusals == Lines{"station H-1 has no curve 8"});
  }
  SECTION("as known before it was adopted") {
    const auto before = ground.book.newest_act();
    ground.add({period(1, "2019-01-01T00:00Z", "")});
    CHECK(collect(ground.book, request("2020-01-01T00:00Z")).input.parent);
    CHECK_FALSE(collect(ground.book, request("2020-01-01T00:00Z"), Known{before}).input.parent);
  }
}

TEST_CASE("a gauging counts once along a line of descent") {
  Ground ground;
  ground.add_curve("2019-01-01T00:00Z", {}, {"G1", "G2"});
  ground.add_curve("2019-07-01T00:00Z", 1, {}, {"G3"});
  auto asked = request("2019-05-01T00:00Z");

  SECTION("used by the parent") {
    asked.descends_from = 1;
    CHECK(collect(ground.book, asked).refusals ==
          Lines{"curve 1, the parent, used gaugings that this derivation would use again: G2; name an "
                "earlier parent "
                "(--descends-from N), start a new lineage (--first) or leave them out (--leave-out G2)"});
    asked.options.leave_out = {"G2"};
    const auto found = collect(ground.book, asked);
    CHECK(found.refusals.empty());
    CHECK(ids(found) == Lines{"G2", "G3"});
  }
  SECTION("used by an ancestor; one that the parent left out is free") {
    asked.descends_from = 2;
    CHECK(collect(ground.book, asked).refusals ==
          Lines{"curve 1, an ancestor of curve 2, used gaugings that this derivation would use again: G2; "
                "name an "
                "earlier parent (--descends-from N), start a new lineage (--first) or leave them out "
                "(--leave-out G2)"});
    asked.from = at("2020-01-01T00:00Z");
    CHECK(collect(ground.book, asked).refusals.empty());
  }
  SECTION("without gaugings: one inside the new period, left out or not") {
    asked.descends_from = 2;
    asked.options.without_gaugings = true;
    const Lines expected{
        "curve 1, an ancestor of curve 2, used gaugings inside the new period: G2; name a parent "
        "without them (--descends-from N)"};
    CHECK(collect(ground.book, asked).refusals == expected);
    asked.options.leave_out = {"G2"};
    CHECK(collect(ground.book, asked).refusals == expected);
    asked.options.leave_out.clear();
    asked.from = at("2020-01-01T00:00Z");
    CHECK(collect(ground.book, asked).refusals.empty());
  }
}

TEST_CASE("the reach rows in force at a time") {
  const std::vector<ReachRow> reaches{
      reach("2010-01-01T00:00Z", ControlKind::section, "WEIR"),            // 1
      reach("2010-01-01T00:00Z", ControlKind::channel, "CS1"),             // 2
      reach("2010-01-01T00:00Z", ControlKind::overbank, "CS1", "left"),    // 3
      reach("2010-01-01T00:00Z", ControlKind::overbank, "CS1", "right"),   // 4
      reach("2014-01-01T00:00Z", ControlKind::channel, "CS1"),             // 5: rougher
      reach("2015-01-01T00:00Z", ControlKind::overbank, "CS1", "left"),    // 6
      reach("2018-01-01T00:00Z", ControlKind::channel, "CS2"),             // 7: moved
      reach("2018-01-01T00:00Z", ControlKind::overbank, "CS2", "left"),    // 8
      reach("2020-01-01T00:00Z", ControlKind::overbank, "PLAIN", "main"),  // 9
  };
  using Numbers = std::vector<std::int64_t>;
  CHECK(in_force(reaches, "2009-12-31T00:00Z").empty());
  CHECK(in_force(reaches, "2010-01-01T00:00Z") == Numbers{1, 2, 3, 4});
  CHECK(in_force(reaches, "2014-06-01T00:00Z") == Numbers{1, 5, 3, 4});
  CHECK(in_force(reaches, "2017-12-31T23:59Z") == Numbers{1, 5, 6, 4});
  // The flood plain of the cross-section that the channel left goes with it.
  CHECK(in_force(reaches, "2018-01-01T00:00Z") == Numbers{1, 7, 8});
  CHECK(in_force(reaches, "2021-01-01T00:00Z") == Numbers{1, 7, 8, 9});
}
