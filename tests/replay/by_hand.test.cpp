// Small cases whose answers are worked out by hand. Curves with exponent 1, so that flow is a multiple of the
// depth.

#include <catch2/catch.hpp>
#include <cmath>

#include "replay/replay.hpp"
#include "station_book.hpp"

using namespace station_book;

namespace {

RatingCurve proportional(double per_metre) {
  return curve({control(ControlKind::channel, 100, 1, per_metre)});
}

store::StageReading reading(const std::string& time, std::int64_t mm, Quality quality = Quality::unchecked) {
  return {at(time), mm, quality, 1};
}

/// Gauge zero 100 m from 2020 on, so that stage is depth; curves of 1, 2 and 10 m3/s per metre.
class Small {
 public:
  Small(const std::vector<Period>& periods, std::vector<store::StageReading> readings,
        std::int64_t gap_minutes = 1440)
      : book_(store::Book::create(path_.text(), head("new"), settings(gap_minutes))) {
    add_ground(book_, StationClock{}, {zero("2020-01-01T00:00Z", 100)});
    add_curves(book_, {proportional(1), proportional(2), proportional(10)});
    if (!periods.empty()) add_edition(book_, periods);
    add_stage(book_, std::move(readings));
  }
  [[nodiscard]] replay::Replayer replayer() const { return {book_, history::view_of(book_, kStation)}; }
  [[nodiscard]] std::vector<replay::DayMean> days(const std::string& from, const std::string& until) const {
    std::vector<replay::DayMean> all;
    replayer().day_means(day_of(at(from), {}), day_of(at(until), {}),
                         [&](const replay::DayMean& mean) { all.push_back(mean); });
    return all;
  }
  [[nodiscard]] replay::FlowBlock flows(const std::string& from, const std::string& until) const {
    replay::FlowBlock only;
    replayer().run(at(from), at(until), [&](const replay::FlowBlock& block) { only = block; });
    return only;
  }

 private:
  static store::Settings settings(std::int64_t gap_minutes) {
    store::Settings made;
    made.longest_gap_minutes = gap_minutes;
    return made;
  }
  TemporaryPath path_{"by-hand"};
  store::Book book_;
};

}  // namespace

TEST_CASE("a boundary at a reading belongs to the later period") {
  const Small small({period(1, "2020-01-01T00:00Z", "2020-01-01T02:00Z"), period(2, "2020-01-01T02:00Z", "")},
                    {reading("2020-01-01T01:00Z", 1000), reading("2020-01-01T02:00Z", 1000),
                     reading("2020-01-01T03:00Z", 1000)});
  const auto block = small.flows("2020-01-01T00:00Z", "2020-01-02T00:00Z");
  CHECK(block.curve == std::vector<int>{1, 2, 2});
  CHECK(block.discharge_m3s[1] == Approx(2).epsilon(1e-14));
  // Up to the boundary the old curve holds: nothing of the step is spread over the hour before.
  std::vector<replay::FlowPiece> pieces;
  small.replayer().pieces(at("2020-01-01T00:00Z"), at("2020-01-02T00:00Z"),
                          [&](const replay::FlowPiece& piece) { pieces.push_back(piece); });
  REQUIRE(pieces.size() == 2);
  CHECK(pieces[0].until.time_ms == to_ms(at("2020-01-01T02:00Z")));
  CHECK(pieces[0].until.discharge_m3s == Approx(1).epsilon(1e-14));
  CHECK(pieces[0].until.curve == 1);
  CHECK(pieces[1].from.discharge_m3s == Approx(2).epsilon(1e-14));
}

TEST_CASE("a boundary between readings: the level is interpolated and both curves are read") {
  // Depth 2 m at midnight, 4 m a day later: 3 m at noon. 1 m3/s per metre before, 2 after.
  const Small small({period(1, "2020-01-01T00:00Z", "2020-01-02T12:00Z"), period(2, "2020-01-02T12:00Z", "")},
                    {reading("2020-01-02T00:00Z", 2000), reading("2020-01-03T00:00Z", 4000)});
  const auto days = small.days("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  REQUIRE(days.size() == 3);
  CHECK_FALSE(days[0].mean_m3s);
  CHECK(days[0].flags == bit(Flag::gap));
  CHECK(days[1].mean_m3s.value() == Approx((2.5 + 7) / 2).epsilon(1e-14));
  CHECK(days[1].share == 1);
  CHECK(days[1].flags == 0);
  CHECK(days[1].quality == Quality::unchecked);
  CHECK(days[1].curves == std::vector<int>{1, 2});
  CHECK_FALSE(days[2].mean_m3s);
}

TEST_CASE("several boundaries between two readings, one of them the begin of a time without a curve") {
  const Small small(
      {period(1, "2020-01-01T00:00Z", "2020-01-02T06:00Z"),
       period({}, "2020-01-02T06:00Z", "2020-01-02T09:00Z"), period(3, "2020-01-02T09:00Z", "")},
      {reading("2020-01-02T00:00Z", 1000), reading("2020-01-03T00:00Z", 1000)});
  const auto days = small.days("2020-01-02T00:00Z", "2020-01-03T00:00Z");
  CHECK(days[0].share == 21.0 / 24);
  CHECK(days[0].mean_m3s.value() == Approx((6 * 1 + 15 * 10) / 21.0).epsilon(1e-14));
  CHECK(words(days[0].flags) == "gap");
  CHECK(days[0].quality == Quality::estimate);
  CHECK(days[0].curves == std::vector<int>{1, 3});
}

TEST_CASE("a blend passes linearly in time; its start is the old curve") {
  const Small small({period(1, "2020-01-01T00:00Z", "2020-01-31T22:00Z"),
                     period(3, "2020-01-31T22:00Z", "", Millis(4 * 3'600'000))},
                    {reading("2020-01-31T21:00Z", 1000), reading("2020-01-31T22:00Z", 1000),
                     reading("2020-01-31T23:00Z", 1000), reading("2020-02-01T00:00Z", 1000),
                     reading("2020-02-01T01:00Z", 1000), reading("2020-02-01T02:00Z", 1000)});
  const auto january = small.flows("2020-01-01T00:00Z", "2020-02-01T00:00Z");
  REQUIRE(january.time_ms.size() == 3);
  CHECK(january.discharge_m3s[1] == Approx(1).epsilon(1e-14));
  CHECK(january.discharge_m3s[2] == Approx(3.25).epsilon(1e-14));
  CHECK(january.curve == std::vector<int>{1, 3, 3});
  CHECK(words(january.flags[2]) == "blended");
  CHECK(january.quality[2] == Quality::estimate);
  const auto february = small.flows("2020-02-01T00:00Z", "2020-03-01T00:00Z");
  REQUIRE(february.time_ms.size() == 3);
  CHECK(february.discharge_m3s[0] == Approx(5.5).epsilon(1e-14));
  CHECK(february.discharge_m3s[1] == Approx(7.75).epsilon(1e-14));
  CHECK(february.discharge_m3s[2] == Approx(10).epsilon(1e-14));
  CHECK(february.flags[2] == 0);
}

TEST_CASE("a blank reading is none: its neighbours stay neighbours while they are near enough") {
  const std::vector<Period> always{period(1, "2020-01-01T00:00Z", "")};
  const std::vector<store::StageReading> readings{
      reading("2020-01-02T00:00Z", 1000), reading("2020-01-02T12:00Z", store::kMissing),
      reading("2020-01-02T13:00Z", 7000, Quality::missing), reading("2020-01-03T00:00Z", 3000)};
  const Small near(always, readings, 1440);
  CHECK(near.days("2020-01-02T00:00Z", "2020-01-03T00:00Z")[0].mean_m3s.value() == Approx(2).epsilon(1e-14));
  const auto block = near.flows("2020-01-02T00:00Z", "2020-01-03T00:00Z");
  CHECK(std::isnan(block.discharge_m3s[1]));
  CHECK(std::isnan(block.discharge_m3s[2]));
  CHECK(block.quality[2] == Quality::missing);
  CHECK(block.flags[1] == bit(Flag::gap));
}

TEST_CASE("readings further apart than the longest gap have no flow between them") {
  const Small far({period(1, "2020-01-01T00:00Z", "")},
                  {reading("2020-01-02T00:00Z", 1000), reading("2020-01-03T00:00Z", 3000)}, 1439);
  const auto day = far.days("2020-01-02T00:00Z", "2020-01-03T00:00Z")[0];
  CHECK_FALSE(day.mean_m3s);
  CHECK(day.share == 0);
}

TEST_CASE("one piece may hold several days") {
  const Small small({period(1, "2020-01-01T00:00Z", "")},
                    {reading("2020-01-02T00:00Z", 1000), reading("2020-01-06T00:00Z", 5000)}, 10'000);
  const auto days = small.days("2020-01-03T00:00Z", "2020-01-07T00:00Z");
  REQUIRE(days.size() == 4);
  CHECK(days[0].mean_m3s.value() == Approx(2.5).epsilon(1e-14));
  CHECK(days[2].mean_m3s.value() == Approx(4.5).epsilon(1e-14));
  CHECK_FALSE(days[3].mean_m3s);
}

TEST_CASE(
    "the first day of a month needs the last reading of the month before, the last day the first of the "
    "next") {
  const Small small({period(1, "2020-01-01T00:00Z", "")},
                    {reading("2020-01-31T12:00Z", 1000), reading("2020-02-01T12:00Z", 3000),
                     reading("2020-02-02T00:00Z", 3000), reading("2020-02-28T20:00Z", 1000),
                     reading("2020-02-29T20:00Z", 1000), reading("2020-03-01T04:00Z", 5000)});
  // 12 h from 2 to 3, 12 h of 3.
  CHECK(small.days("2020-02-01T00:00Z", "2020-02-02T00:00Z")[0].mean_m3s.value() ==
        Approx(2.75).epsilon(1e-14));
  // 20 h of 1 m3/s, then 4 h from 1 to 3.
  CHECK(small.days("2020-02-29T00:00Z", "2020-03-01T00:00Z")[0].mean_m3s.value() ==
        Approx(28.0 / 24).epsilon(1e-14));
}

TEST_CASE("the least share of a day is enough") {
  const std::vector<Period> always{period(1, "2020-01-01T00:00Z", "")};
  const Small enough(always, {reading("2020-01-02T00:00Z", 1000), reading("2020-01-02T19:12Z", 1000)});
  CHECK(enough.days("2020-01-02T00:00Z", "2020-01-03T00:00Z")[0].mean_m3s);
  const Small less(always, {reading("2020-01-02T00:00Z", 1000), reading("2020-01-02T19:11:59Z", 1000)});
  CHECK_FALSE(less.days("2020-01-02T00:00Z", "2020-01-03T00:00Z")[0].mean_m3s);
}

TEST_CASE("below the offset the flow is 0, and it is said") {
  const Small small({period(1, "2020-01-01T00:00Z", "")},
                    {reading("2020-01-02T00:00Z", -500), reading("2020-01-03T00:00Z", 0),
                     reading("2020-01-04T00:00Z", 1000)});
  const auto block = small.flows("2020-01-02T00:00Z", "2020-01-05T00:00Z");
  CHECK(block.discharge_m3s[0] == 0);
  CHECK(block.discharge_m3s[1] == 0);
  CHECK(block.sd_ln_q[0] == 0);
  CHECK(words(block.flags[0]) == "no-flow");
  CHECK(block.curve[0] == 1);
  const auto days = small.days("2020-01-02T00:00Z", "2020-01-04T00:00Z");
  CHECK(days[0].mean_m3s.value() == 0);
  CHECK(words(days[0].flags) == "no-flow");
  CHECK(days[0].sd_ln_q == 0);
  CHECK(days[1].mean_m3s.value() == Approx(0.5).epsilon(1e-14));
  CHECK(days[1].flags == 0);
}

TEST_CASE("before the first gauge zero and outside periods there is no flow") {
  const Small small({period(1, "2019-12-01T00:00Z", "2020-01-02T00:00Z")},
                    {reading("2019-12-31T23:00Z", 1000), reading("2020-01-01T00:00Z", 1000),
                     reading("2020-01-02T00:00Z", 1000)});
  const auto december = small.flows("2019-12-01T00:00Z", "2020-01-01T00:00Z");
  CHECK(std::isnan(december.level_m[0]));
  CHECK(december.flags[0] == bit(Flag::gap));
  const auto january = small.flows("2020-01-01T00:00Z", "2020-02-01T00:00Z");
  CHECK(january.discharge_m3s[0] == Approx(1).epsilon(1e-14));
  CHECK(january.level_m[1] == 101);
  CHECK(std::isnan(january.discharge_m3s[1]));
  CHECK(january.curve[1] == 0);
}

TEST_CASE("a station without an edition cannot be replayed") {
  const Small small({}, {reading("2020-01-02T00:00Z", 1000)});
  CHECK_THROWS_WITH(small.replayer(), "station R-1 has no edition yet: derive a curve and adopt it");
}

TEST_CASE("limits belong to the range, and a blend with one dry curve has a flow") {
  const TemporaryPath path("limits");
  auto book = store::Book::create(path.text(), head("new"));
  add_ground(book, StationClock{}, {zero("2020-01-01T00:00Z", 100)});
  RatingCurve gauged = proportional(1);
  gauged.gauged_low_m3s = gauged.gauged_high_m3s = gauged.lineage_high_m3s = 1;
  gauged.surveyed_top_m = 101;
  add_curves(book, {gauged, curve({control(ControlKind::channel, 105, 1, 1)})});
  add_edition(book, {period(1, "2020-01-01T00:00Z", "2020-01-02T00:00Z"),
                     period(2, "2020-01-02T00:00Z", "", Millis(4 * 3'600'000))});
  add_stage(book, {reading("2020-01-01T12:00Z", 1000), reading("2020-01-01T13:00Z", 1001),
                   reading("2020-01-02T02:00Z", 1000), reading("2020-01-02T03:00Z", -1000)});
  replay::Replayer(book, history::view_of(book, kStation))
      .run(at("2020-01-01T00:00Z"), at("2020-02-01T00:00Z"), [](const replay::FlowBlock& block) {
        CHECK(block.discharge_m3s[0] == 1);
        CHECK(block.flags[0] == 0);
        CHECK(block.quality[0] == Quality::unchecked);
        CHECK(words(block.flags[1]) == "above-gauged above-surveyed");
        CHECK(block.quality[1] == Quality::poor);
        CHECK(block.discharge_m3s[2] == 0.5);
        CHECK(words(block.flags[2]) == "blended");
        CHECK(block.discharge_m3s[3] == 0);
        CHECK(words(block.flags[3]) == "below-gauged no-flow blended");
      });
}

TEST_CASE("a tentative edition is tried without storing it") {
  const TemporaryPath path("tentative");
  auto book = store::Book::create(path.text(), head("new"));
  add_ground(book, StationClock{}, {zero("2020-01-01T00:00Z", 100)});
  add_curves(book, {proportional(1)});
  add_stage(book, {reading("2020-01-02T00:00Z", 1500)});
  auto view = history::view_of(book, kStation);
  REQUIRE_FALSE(view.edition);
  view.edition.emplace();
  view.edition->periods = {period(1, "2020-01-01T00:00Z", "")};
  int seen = 0;
  replay::Replayer(book, view)
      .run(at("2020-01-01T00:00Z"), at("2021-01-01T00:00Z"), [&](const replay::FlowBlock& block) {
        ++seen;
        CHECK(block.discharge_m3s[0] == Approx(1.5).epsilon(1e-14));
      });
  CHECK(seen == 1);
  view.edition->periods[0].curve = 9;
  CHECK_THROWS_AS(replay::Replayer(book, view), store::StoreError);
}
