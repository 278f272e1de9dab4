#include "history/state.hpp"

#include <catch2/catch.hpp>

#include "book_fixture.hpp"

using namespace book_fixture;
using history::CurveState;
using history::out_of_date;
using history::view_of;

namespace {

/// Station, datum, survey, reach row and two gaugings.
struct Ground : Fixture {
  Ground() {
    add(zero("2018-01-01T00:00Z", 99.5));
    add(survey("S1", "2018-06-01T00:00Z"));
    add(reach("2018-01-01T00:00Z", ControlKind::channel, "CS1"));
    add(gauging("G1", "2019-02-01T10:00Z", 1.2, 8));
    add(gauging("G2", "2019-06-01T10:00Z", 2.0, 30));
  }
};

}  // namespace

TEST_CASE("a view is the newest known, or what is asked for") {
  Ground ground;
  const auto zero_act = ground.book.data_version("H-1");
  const auto stage_act = ground.add_stage("2019-01-01T00:00Z", 1234);
  ground.add_curve("2019-01-01T00:00Z", {}, {"G1", "G2"});
  const auto first = ground.add({period(1, "2019-01-01T00:00Z", "")});
  const auto second = ground.add({period(1, "2019-01-01T00:00Z", "2020-01-01T00:00Z")});
  const auto later = ground.add_stage("2019-01-01T01:00Z", 1230);

  const auto newest = view_of(ground.book, "H-1");
  CHECK(newest.edition->number == 2);
  CHECK(newest.data_version == later);

  const auto then = view_of(ground.book, "H-1", Known{first});
  CHECK(then.edition->number == 1);
  CHECK(then.data_version == stage_act);
  CHECK(then.known.act == first);
  CHECK_FALSE(view_of(ground.book, "H-1", Known{stage_act}).edition);

  const auto asked = view_of(ground.book, "H-1", {}, 1, stage_act);
  CHECK(asked.edition->number == 1);
  CHECK(asked.data_version == stage_act);
  CHECK(view_of(ground.book, "H-1", {}, {}, zero_act).data_version == zero_act);

  CHECK_THROWS_WITH(view_of(ground.book, "H-2"), "there is no station H-2");
  CHECK_THROWS_WITH(view_of(ground.book, "H-1", {}, 3), "station H-1 has no edition 3");
  CHECK_THROWS_WITH(
      view_of(ground.book, "H-1", Known{first}, 2),
      "edition 2 of station H-1 was not yet known then: act " + std::to_string(second) + " made it");
  CHECK_THROWS_WITH(view_of(ground.book, "H-1", {}, {}, second),
                    "station H-1 has no data version " + std::to_string(second) + "; the one before it is " +
                        std::to_string(stage_act));
  CHECK_THROWS_WITH(view_of(ground.book, "H-1", Known{first}, {}, later),
                    "data version " + std::to_string(later) + " of station H-1 was not yet known then");
  CHECK_THROWS_AS(view_of(ground.book, "H-1", {}, {}, -4), store::StoreError);
}

TEST_CASE("a curve is proposed, in force or superseded by what the editions say") {
  Edition first;
  first.periods = {period(1, "2019-01-01T00:00Z", "2020-01-01T00:00Z"), period(2, "2020-01-01T00:00Z", "")};
  Edition second;
  second.periods = {period(1, "2019-01-01T00:00Z", "2020-01-01T00:00Z"), period(3, "2020-01-01T00:00Z", "")};
  CHECK(history::state_of(1, {}) == CurveState::proposed);
  CHECK(history::state_of(1, {first, second}) == CurveState::in_force);
  CHECK(history::state_of(2, {first}) == CurveState::in_force);
  CHECK(history::state_of(2, {first, second}) == CurveState::superseded);
  CHECK(history::state_of(4, {first, second}) == CurveState::proposed);
  CHECK(word(CurveState::proposed) == "proposed");
  CHECK(word(CurveState::in_force) == "in force");
  CHECK(word(CurveState::superseded) == "superseded");
}

TEST_CASE("a curve is out of date when one of its inputs was corrected, and not before") {
  Ground ground;
  ground.add_curve("2019-01-01T00:00Z", {}, {"G1"}, {"G2"});
  const auto reasons = [&](int number, Known known = {}) {
    return out_of_date(ground.book, *ground.book.curve("H-1", number), known);
  };
  const auto fresh = ground.book.newest_act();
  REQUIRE(reasons(1).empty());

  SECTION("a corrected gauging") {
    ground.add(gauging("G1", "2019-02-01T10:00Z", 1.2, 9), true);
    CHECK(reasons(1) ==
          std::vector<std::string>{"gauging G1 was corrected: version 2, the curve used version 1"});
  }
  SECTION("a withdrawn gauging") {
    ground.add(gauging("G1", "2019-02-01T10:00Z", 1.2, 8), true, true);
    CHECK(reasons(1) == std::vector<std::string>{"gauging G1 was withdrawn"});
  }
  SECTION("a gauging left out by name is no input") {
    ground.add(gauging("G2", "2019-06-01T10:00Z", 2.0, 31), true);
    CHECK(reasons(1).empty());
  }
  SECTION("a corrected survey") {
    ground.add(survey("S1", "2018-06-02T00:00Z"), true);
    CHECK(reasons(1) ==
          std::vector<std::string>{"survey S1 was corrected: version 2, the curve used version 1"});
  }
  SECTION("a corrected reach row") {
    auto row = reach("2018-01-01T00:00Z", ControlKind::channel, "CS1");
    row.slope = 0.002;
    ground.add(row, true);
    CHECK(reasons(1) == std::vector<std::string>{
                            "the reach row of channel was corrected: version 2, the curve used version 1"});
  }
  SECTION("a re-levelling found late moves the level of a gauging") {
    ground.add(zero("2019-01-15T00:00Z", 99.47));
    CHECK(reasons(1) == std::vector<std::string>{
                            "the level of gauging G1 moved by -0.030 m (gauge zero or stage correction)"});
  }
  SECTION("a re-levelling after the last gauging moves nothing") {
    ground.add(zero("2019-07-15T00:00Z", 99.47));
    CHECK(reasons(1).empty());
  }
  SECTION("a stage correction over a gauging") {
    ground.add(StageCorrection{"H-1", at("2019-01-31T00:00Z"), at("2019-02-02T00:00Z"),
                               HeightChange::from_metres(0.012), HeightChange::from_metres(0.012), ""});
    CHECK(reasons(1) == std::vector<std::string>{
                            "the level of gauging G1 moved by +0.012 m (gauge zero or stage correction)"});
  }
  SECTION("a parent that is out of date") {
    ground.add_curve("2020-01-01T00:00Z", 1, {});
    CHECK(reasons(2).empty());
    ground.add(gauging("G1", "2019-02-01T10:00Z", 1.2, 9), true);
    CHECK(reasons(2) == std::vector<std::string>{"curve 1, from which it descends, is out of date"});
  }
  CHECK(reasons(1, Known{fresh}).empty());
}
