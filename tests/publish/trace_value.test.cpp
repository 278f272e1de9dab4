// The chain behind a flow, worked out by hand.

#include <catch2/catch.hpp>
#include <cmath>

#include "publish/trace.hpp"
#include "small_book.hpp"

using namespace small_book;

namespace {

publish::TracedValue trace(const store::Book& book, const std::string& time, std::optional<int> edition = {},
                           std::optional<std::int64_t> data = {}, Known known = {}) {
  return publish::trace_value(book, {kStation, at(time), known, edition, data});
}

std::vector<std::int64_t> acts_of(const publish::TracedValue& traced) {
  std::vector<std::int64_t> numbers;
  for (const auto& act : traced.acts) numbers.push_back(act.number);
  return numbers;
}

/// Acts of every small book: 1 new, 2 ground (station, survey, reach, gauge zero), 3 curves, 4 edition, 5
/// stage.
constexpr std::int64_t kGround = 2, kCurves = 3, kEdition = 4, kStage = 5;

/// Curve 1 until noon of the 2nd, then curve 2 with a blend of 4 h. Depth 1 m at midnight, 2 m a day later.
SmallBook with_boundary(Millis blend = std::chrono::hours(4)) {
  return SmallBook(
      {period(1, "2020-01-01T00:00Z", "2020-01-02T12:00Z"), period(2, "2020-01-02T12:00Z", "", blend)},
      {reading("2020-01-02T00:00Z", 1000), reading("2020-01-03T00:00Z", 2000)}, {}, with_gap(1440));
}

}  // namespace

TEST_CASE("a flow at a reading, not published") {
  const auto small = with_boundary();
  const auto traced = trace(small.book, "2020-01-02T00:00Z");
  CHECK(traced.station == kStation);
  CHECK(traced.discharge_m3s.value() == Approx(1).epsilon(1e-14));
  CHECK(traced.recomputed_m3s == traced.discharge_m3s);
  CHECK(traced.agrees());
  CHECK(traced.no_flow_because.empty());
  CHECK(traced.sd_ln_q == Approx(0.05));
  CHECK(traced.quality == Quality::unchecked);
  CHECK(traced.period.curve == 1);
  CHECK(traced.edition_act == kEdition);
  CHECK(traced.view.data_version == kStage);
  REQUIRE(traced.readings.size() == 1);
  const auto& read = traced.readings[0];
  CHECK(read.time == at("2020-01-02T00:00Z"));
  CHECK(read.recorded == "1.000 m");
  CHECK(read.has_level);
  CHECK(read.stage == Stage::from_metres(1));
  CHECK(read.file == "stage.csv");
  CHECK(read.line == 1);
  CHECK(read.act == kStage);
  CHECK(read.gauge_zero == GaugeZero::from_metres(100));
  CHECK(read.gauge_zero_file == "ground.csv");
  CHECK(read.gauge_zero_source.line == 2);
  CHECK(read.correction == HeightChange{});
  CHECK(read.level == Level::from_metres(101));
  REQUIRE(traced.curves.size() == 1);
  const auto& curve = traced.curves[0];
  CHECK(curve.curve.number == 1);
  CHECK(curve.act == kCurves);
  CHECK(curve.weight == 1);
  CHECK(curve.level_m == 101);
  CHECK(curve.survey_file == "ground.csv");
  CHECK(curve.survey_source.line == 3);
  CHECK(curve.out_of_date.empty());
  REQUIRE(curve.controls.size() == 1);
  CHECK(curve.controls[0].counts);
  CHECK(curve.controls[0].discharge_m3s == curve.discharge_m3s);
  CHECK(!traced.publication);
  CHECK(!traced.replay);
  CHECK(!traced.published_units);
  CHECK(traced.recomputed_units == 1000);
  CHECK(acts_of(traced) == std::vector<std::int64_t>{kGround, kCurves, kEdition, kStage});
  CHECK(traced.acts.back().who == "records officer A");
}

TEST_CASE("between readings the flow is linear, up to a boundary") {
  const auto small = with_boundary();
  // The level at noon is 1.5 m: 1.5 m3/s through curve 1. At 06:00: half way from 1 to 1.5.
  const auto before = trace(small.book, "2020-01-02T06:00Z");
  CHECK(before.discharge_m3s.value() == Approx(1.25).epsilon(1e-14));
  CHECK(before.agrees());
  REQUIRE(before.readings.size() == 2);
  CHECK(before.readings[1].recorded == "2.000 m");
  REQUIRE(before.curves.size() == 2);  // the ends of the stretch: the reading, and the boundary
  CHECK(before.curves[0].level_m == 101);
  CHECK(before.curves[1].level_m == 101.5);
  CHECK(before.curves[1].curve.number == 1);
  // sd x Q goes from 0.05 to 1.5 x 0.04.
  CHECK(before.sd_ln_q == Approx((0.05 + 1.5 * 0.04) / 2 / 1.25));
}

TEST_CASE("a boundary belongs to the later period; a blend begins with the outgoing curve") {
  const auto small = with_boundary();
  const auto traced = trace(small.book, "2020-01-02T12:00Z");
  CHECK(traced.period.curve == 2);
  CHECK(traced.discharge_m3s.value() == Approx(1.5).epsilon(1e-14));
  CHECK(traced.agrees());
  REQUIRE(traced.curves.size() == 3);  // curve 1 and 2 at noon, curve 2 at the reading after it
  CHECK(traced.curves[0].curve.number == 1);
  CHECK(traced.curves[0].weight == 1);
  CHECK(traced.curves[1].curve.number == 2);
  CHECK(traced.curves[1].weight == 0);
  CHECK(traced.curves[2].curve.number == 2);
  CHECK(traced.curves[2].discharge_m3s == Approx(4).epsilon(1e-14));
  // Without a blend the step is whole.
  const auto sharp = with_boundary(Millis(0));
  const auto step = trace(sharp.book, "2020-01-02T12:00Z");
  CHECK(step.discharge_m3s.value() == Approx(3).epsilon(1e-14));
  CHECK(step.agrees());
  CHECK(trace(sharp.book, "2020-01-02T11:59:59.999Z").discharge_m3s.value() == Approx(1.5).epsilon(1e-6));
}

TEST_CASE("in a blend both curves are weighed") {
  SmallBook small({period(1, "2020-01-01T00:00Z", "2020-01-02T00:00Z"),
                   period(2, "2020-01-02T00:00Z", "", std::chrono::hours(4))},
                  readings("2020-01-01T12:00Z", "2020-01-03T00:00Z", 1, [](std::int64_t) { return 1000; }));
  const auto traced = trace(small.book, "2020-01-02T01:00Z");
  CHECK(traced.discharge_m3s.value() == Approx(0.75 * 1 + 0.25 * 2).epsilon(1e-14));
  CHECK(traced.agrees());
  CHECK(has(traced.flags, Flag::blended));
  REQUIRE(traced.curves.size() == 2);
  CHECK(traced.curves[0].curve.number == 1);
  CHECK(traced.curves[0].weight == 0.75);
  CHECK(traced.curves[1].curve.number == 2);
  CHECK(traced.curves[1].weight == 0.25);
  CHECK(traced.curves[1].discharge_m3s == Approx(2).epsilon(1e-14));
  const auto end = trace(small.book, "2020-01-02T04:00Z");
  CHECK(end.curves.size() == 1);
  CHECK(end.discharge_m3s.value() == Approx(2).epsilon(1e-14));
  // The blend ends at a reading here; half an hour before, flow lies on the line between its readings.
  const auto last = trace(small.book, "2020-01-02T03:30Z");
  CHECK(last.discharge_m3s.value() == Approx((1.75 + 2) / 2).epsilon(1e-14));
  CHECK(last.agrees());
}

TEST_CASE("no flow, and why") {
  SmallBook small({period(1, "2020-01-01T12:00Z", "2020-01-03T00:00Z"),
                   [] {
                     auto ice = period({}, "2020-01-03T00:00Z", "2020-01-04T00:00Z");
                     ice.none = NoCurve::ice;
                     return ice;
                   }(),
                   period(1, "2020-01-05T00:00Z", "")},
                  {reading("2019-12-31T00:00Z", 1000), reading("2020-01-01T13:00Z", 1000),
                   reading("2020-01-01T19:00Z", 1000), reading("2020-01-02T00:00Z", store::kMissing),
                   reading("2020-01-02T03:00Z", 1000), reading("2020-01-02T04:00Z", 1000, Quality::missing),
                   reading("2020-01-03T12:00Z", 1000), reading("2020-01-04T12:00Z", 1000),
                   reading("2020-01-06T00:00Z", 1000)});
  const auto why = [&](const std::string& time) {
    const auto traced = trace(small.book, time);
    CAPTURE(time, traced.no_flow_because);
    CHECK(!traced.discharge_m3s);
    CHECK(!traced.recomputed_m3s);
    CHECK(!traced.recomputed_units);
    CHECK(traced.curves.empty());
    CHECK(traced.agrees());
    CHECK(traced.flags == bit(Flag::gap));
    CHECK(traced.quality == Quality::missing);
    return traced.no_flow_because;
  };
  CHECK(why("2020-01-02T00:00Z") == "the reading at this time is missing");
  CHECK(why("2020-01-02T04:00Z") == "the reading at this time is missing");
  CHECK(why("2020-01-01T23:00Z") == "gap of 8 h between readings; flow is joined over at most 6 h");
  CHECK(why("2020-01-02T03:30Z") == "gap of 33 h between readings; flow is joined over at most 6 h");
  CHECK(why("2020-01-03T12:00Z") == "the period has no curve: ice");
  CHECK(why("2020-01-03T13:00Z") == "the period has no curve: ice");
  CHECK(why("2020-01-04T12:00Z") == "no period of edition 1 holds this time");
  CHECK(why("2019-12-31T00:00Z") == "no period of edition 1 holds this time");
  CHECK(why("2020-01-01T12:30Z") == "it is before the first reading, of 2020-01-01T13:00:00Z");
  CHECK(why("2020-02-06T00:00Z") == "it is after the last reading, of 2020-01-06T00:00:00Z");
  CHECK(trace(small.book, "2020-01-02T00:00Z").readings.at(0).recorded == "missing");
  CHECK(!trace(small.book, "2020-01-02T00:00Z").readings.at(0).has_level);
  // A day on, the readings on both sides are shown.
  CHECK(trace(small.book, "2020-01-02T12:00Z").readings.size() == 2);
}

TEST_CASE("before the first gauge zero there is no level") {
  SmallBook small({period(1, "2019-01-01T00:00Z", "")},
                  {reading("2019-12-31T22:00Z", 1000), reading("2019-12-31T23:00Z", 1000),
                   reading("2020-01-01T01:00Z", 1000)});
  CHECK(trace(small.book, "2019-12-31T23:00Z").no_flow_because == "it is before the first gauge zero");
  CHECK(trace(small.book, "2019-12-31T22:30Z").no_flow_because == "it is before the first gauge zero");
  CHECK(trace(small.book, "2020-01-01T00:30Z").no_flow_because ==
        "it is before the first reading, of 2020-01-01T01:00:00Z");
  CHECK(trace(small.book, "2020-01-01T01:00Z").discharge_m3s);
  SmallBook empty({period(1, "2020-01-01T00:00Z", "")}, {});
  CHECK(trace(empty.book, "2020-01-02T00:00Z").no_flow_because == "there are no readings");
}

TEST_CASE("a levelling and a stage correction change the level, and their acts are named") {
  auto small = with_boundary();
  std::int64_t levelling = 0, correction = 0;
  {
    auto writer = small.book.begin(head("levelling"));
    const auto file = writer.add_file("levelling.csv", 1, std::string(64, '1'), "gauge zero");
    writer.add(zero("2020-01-02T20:00Z", 100.5), {file, 7});
    levelling = writer.commit().number;
  }
  {
    auto writer = small.book.begin(head("correction"));
    const auto file = writer.add_file("correction.csv", 1, std::string(64, '2'), "stage correction");
    // -0.1 m at 20:00 on the 2nd, -0.3 m eight hours later: -0.2 m at midnight.
    writer.add(StageCorrection{kStation, at("2020-01-02T20:00Z"), at("2020-01-03T04:00Z"),
                               HeightChange::from_metres(-0.1), HeightChange::from_metres(-0.3), ""},
               {file, 2});
    correction = writer.commit().number;
  }
  const auto traced = trace(small.book, "2020-01-03T00:00Z");
  REQUIRE(traced.readings.size() == 1);
  const auto& read = traced.readings[0];
  CHECK(read.gauge_zero == GaugeZero::from_metres(100.5));
  CHECK(read.gauge_zero_file == "levelling.csv");
  CHECK(read.gauge_zero_source.line == 7);
  CHECK(read.correction == HeightChange::from_metres(-0.2));
  CHECK(read.level == Level::from_metres(102.3));
  CHECK(traced.discharge_m3s.value() == Approx(4.6).epsilon(1e-13));
  CHECK(traced.agrees());
  CHECK(acts_of(traced) ==
        std::vector<std::int64_t>{kGround, kCurves, kEdition, kStage, levelling, correction});
  // The reading of the 2nd knows neither.
  CHECK(acts_of(trace(small.book, "2020-01-02T00:00Z")) ==
        std::vector<std::int64_t>{kGround, kCurves, kEdition, kStage});
  // Nor does the data version before them.
  const auto then = trace(small.book, "2020-01-03T00:00Z", {}, kStage);
  CHECK(then.discharge_m3s.value() == Approx(4).epsilon(1e-14));
  CHECK(then.agrees());
}

TEST_CASE("a published flow is traced as it was made") {
  auto small = with_boundary();
  const auto replay = small.keep("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  const int number = small.publish(replay);
  const std::int64_t published = small.book.newest_act();
  // Later: another edition, a levelling, other settings.
  add_edition(small.book, {period(3, "2020-01-01T00:00Z", "")});
  {
    auto writer = small.book.begin(head("levelling"));
    const auto file = writer.add_file("levelling.csv", 1, std::string(64, '1'), "gauge zero");
    writer.add(zero("2020-01-02T20:00Z", 101), {file, 2});
    writer.commit();
  }
  store::Settings other;
  other.published_digits = 1;
  other.published_decimals = 0;
  other.longest_gap_minutes = 60;
  small.set(other);

  const auto traced = trace(small.book, "2020-01-03T00:00Z");
  CHECK(traced.publication == number);
  CHECK(traced.publication_act == published);
  CHECK(traced.replay == replay.number);
  CHECK(traced.view.edition->number == 1);
  CHECK(traced.view.data_version == kStage);
  CHECK(traced.published_units == 4000);
  CHECK(traced.recomputed_units == 4000);
  CHECK(traced.decimals == 3);
  CHECK(traced.digits == 3);
  CHECK(traced.quality == Quality::good);
  CHECK(traced.agrees());
  CHECK(acts_of(traced) ==
        std::vector<std::int64_t>{kGround, kCurves, kEdition, kStage, replay.act, published});
  // Between its readings, a day apart, flow was joined under the settings of then.
  const auto between = trace(small.book, "2020-01-02T06:00Z");
  CHECK(between.publication == number);
  CHECK(between.discharge_m3s.value() == Approx(1.25).epsilon(1e-14));
  CHECK(!between.published_units);
  CHECK(between.agrees());
  // Asked for by name, the newest edition and data are traced, and nothing published stands behind them.
  const auto newest = trace(small.book, "2020-01-03T00:00Z", 2);
  CHECK(!newest.publication);
  CHECK(newest.discharge_m3s.value() == Approx(30).epsilon(1e-13));
  CHECK(newest.agrees());
  CHECK(trace(small.book, "2020-01-03T00:00Z", {}, {}, Known{kStage}).publication == std::nullopt);
  // Outside the publication the newest is traced.
  CHECK(trace(small.book, "2020-01-05T00:00Z").view.edition->number == 2);
}

TEST_CASE("a traced value that differs does not agree") {
  auto small = with_boundary();
  (void)small.publish("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  auto traced = trace(small.book, "2020-01-03T00:00Z");
  REQUIRE(traced.agrees());
  SECTION("by a bit") {
    traced.recomputed_m3s = std::nextafter(*traced.recomputed_m3s, 0);
  }
  SECTION("by being there") {
    traced.discharge_m3s.reset();
  }
  SECTION("in the figure") {
    traced.published_units = 4010;
  }
  SECTION("in having one") {
    traced.published_units.reset();
  }
  CHECK(!traced.agrees());
}

TEST_CASE("section, channel and flood plain are combined by hand") {
  // Section 20 d^1.5 above 100 m, channel 9 d^1.8 above 99.6 m from 100.2 m up, flood plain 30 d^1.7 above
  // 102 m.
  auto both = curve({control(ControlKind::section, 100, 1.5, 20), control(ControlKind::channel, 99.6, 1.8, 9),
                     control(ControlKind::overbank, 102, 1.7, 30)});
  both.takeover_level_m = 100.2;
  auto lesser = both;
  lesser.takeover_level_m.reset();
  TemporaryPath path("trace-controls");
  auto book = store::Book::create(path.text(), head("new"));
  add_ground(book, {}, {zero("2020-01-01T00:00Z", 100)});
  add_curves(book, {both, lesser});
  add_edition(book,
              {period(1, "2020-01-01T00:00Z", "2020-01-02T00:00Z"), period(2, "2020-01-02T00:00Z", "")});
  add_stage(book, {reading("2020-01-01T01:00Z", 100), reading("2020-01-01T02:00Z", 300),
                   reading("2020-01-01T03:00Z", 3000), reading("2020-01-01T04:00Z", -500),
                   reading("2020-01-02T01:00Z", 1000), reading("2020-01-02T02:00Z", 300)});
  const auto counts = [&](const std::string& time) {
    const auto traced = trace(book, time);
    CHECK(traced.agrees());
    std::string text;
    for (const auto& own : traced.curves.at(0).controls) text += own.counts ? 'x' : '-';
    return text;
  };
  const auto flow = [&](const std::string& time) { return trace(book, time).discharge_m3s.value(); };
  CHECK(counts("2020-01-01T01:00Z") == "x--");
  CHECK(flow("2020-01-01T01:00Z") == Approx(20 * std::pow(0.1, 1.5)).epsilon(1e-12));
  CHECK(counts("2020-01-01T02:00Z") == "-x-");  // the greater flow: it has taken over
  CHECK(flow("2020-01-01T02:00Z") == Approx(9 * std::pow(0.7, 1.8)).epsilon(1e-12));
  CHECK(counts("2020-01-01T03:00Z") == "-xx");
  CHECK(flow("2020-01-01T03:00Z") == Approx(9 * std::pow(3.4, 1.8) + 30).epsilon(1e-12));
  CHECK(counts("2020-01-01T04:00Z") == "---");
  CHECK(flow("2020-01-01T04:00Z") == 0);
  CHECK(trace(book, "2020-01-01T04:00Z").no_flow_because.empty());
  CHECK(has(trace(book, "2020-01-01T04:00Z").flags, Flag::no_flow));
  CHECK(counts("2020-01-02T01:00Z") == "-x-");  // 16.5 against 20
  CHECK(counts("2020-01-02T02:00Z") == "x--");  // 3.29 against 4.74
}

TEST_CASE("what cannot be traced") {
  SmallBook none({}, {reading("2020-01-02T00:00Z", 1000)});
  using Catch::Matchers::Contains;
  CHECK_THROWS_WITH(trace(none.book, "2020-01-02T00:00Z"), Contains("no edition yet"));
  const auto small = with_boundary();
  CHECK_THROWS_WITH(trace(small.book, "2020-01-02T00:00Z", 9), Contains("no edition 9"));
  CHECK_THROWS_WITH(trace(small.book, "2020-01-02T00:00Z", {}, 4), Contains("no data version 4"));
  CHECK_THROWS_WITH(publish::trace_value(small.book, {"R-2", at("2020-01-02T00:00Z"), {}, {}, {}}),
                    Contains("no station R-2"));
}
