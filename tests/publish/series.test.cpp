// Series worked out by hand.

#include <catch2/catch.hpp>
#include <cmath>

#include "publish/series.hpp"
#include "small_book.hpp"

using namespace small_book;
using publish::MeanOver;
using publish::SeriesHead;
using publish::SeriesRequest;
using publish::SeriesRow;

namespace {

/// Readings every 6 h from 1 January to 1 March 18:00: depth 1 m, from 16 to 31 January 0.5 m. Curve 1 until
/// 10 February, then curve 2.
struct Winter : SmallBook {
  explicit Winter(const store::Settings& settings = {})
      : SmallBook(
            {period(1, "2020-01-01T00:00Z", "2020-02-10T00:00Z"), period(2, "2020-02-10T00:00Z", "")},
            readings("2020-01-01T00:00Z", "2020-03-02T00:00Z", 6,
                     [](std::int64_t hours) { return hours >= 15 * 24 && hours < 31 * 24 ? 500 : 1000; }),
            clock(), settings) {}
  static StationClock clock() {
    StationClock made;
    made.water_year_month = 1;
    return made;
  }
};

struct Series {
  SeriesHead head;
  std::vector<SeriesRow> rows;
};

Series run(const store::Book& book, const SeriesRequest& request) {
  Series series;
  publish::run_series(
      book, request, [&](const SeriesHead& head) { series.head = head; },
      [&](const SeriesRow& row) { series.rows.push_back(row); });
  return series;
}

SeriesRequest request(const std::string& from, const std::string& until, MeanOver mean = MeanOver::none,
                      bool published = false) {
  SeriesRequest made;
  made.station = kStation;
  made.from = at(from);
  made.until = at(until);
  made.mean = mean;
  made.published = published;
  return made;
}

double u95(double sd) {
  return 100 * (std::exp(1.96 * sd) - 1);
}

bool equal(const SeriesRow& a, const SeriesRow& b) {
  return a.time == b.time && a.discharge_m3s == b.discharge_m3s && a.units == b.units &&
         a.u95_pct == b.u95_pct && a.quality == b.quality && a.curves == b.curves && a.flags == b.flags &&
         a.share == b.share;
}

}  // namespace

TEST_CASE("flows at readings") {
  Winter winter;
  const auto series = run(winter.book, request("2020-02-09T13:00Z", "2020-02-10T06:00Z"));
  CHECK(series.head.edition == 1);
  CHECK(series.head.data_version == winter.book.data_version(kStation));
  CHECK(series.head.known_act == winter.book.newest_act());
  CHECK(series.head.station.name == "Testing Weir");
  CHECK(series.head.survey_of_curve == std::vector<std::string>{"", "S1", "S1", "S1"});
  REQUIRE(series.rows.size() == 2);
  CHECK(series.rows[0].time == at("2020-02-09T18:00Z"));
  CHECK(series.rows[0].discharge_m3s.value() == Approx(1).epsilon(1e-14));
  CHECK(series.rows[0].u95_pct == Approx(u95(0.05)));
  CHECK(series.rows[0].curves == std::vector<int>{1});
  CHECK(series.rows[0].quality == Quality::unchecked);
  CHECK(series.rows[1].discharge_m3s.value() == Approx(2).epsilon(1e-14));
  CHECK(series.rows[1].curves == std::vector<int>{2});
}

TEST_CASE("a reading without flow is a row without discharge") {
  SmallBook small({period(1, "2020-01-01T02:00Z", "")},
                  {reading("2020-01-01T01:00Z", 1000), reading("2020-01-01T02:00Z", store::kMissing),
                   reading("2020-01-01T03:00Z", 1000)});
  const auto rows = run(small.book, request("2020-01-01T00:00Z", "2020-01-02T00:00Z")).rows;
  REQUIRE(rows.size() == 3);
  for (const std::size_t without : {0, 1}) {
    CHECK(!rows[without].discharge_m3s);
    CHECK(rows[without].quality == Quality::missing);
    CHECK(rows[without].flags == bit(Flag::gap));
    CHECK(rows[without].curves.empty());
    CHECK(rows[without].u95_pct == 0);
  }
  CHECK(rows[2].discharge_m3s);
}

TEST_CASE("day means") {
  Winter winter;
  const auto rows = run(winter.book, request("2020-01-14T00:01Z", "2020-01-17T00:00Z", MeanOver::day)).rows;
  REQUIRE(rows.size() == 2);  // the 14th does not begin inside
  // The 15th: 18 h of 1 m3/s, then 6 h from 1 to 0.5.
  CHECK(rows[0].time == at("2020-01-15T00:00Z"));
  CHECK(rows[0].discharge_m3s.value() == Approx(0.9375).epsilon(1e-14));
  CHECK(rows[0].u95_pct == Approx(u95((18 * 0.05 + 6 * (0.05 + 0.5 * 0.06) / 2) / 24 / 0.9375)));
  CHECK(rows[1].discharge_m3s.value() == Approx(0.5).epsilon(1e-14));
  CHECK(rows[1].share == 1);
  CHECK(run(winter.book, request("2020-01-15T00:01Z", "2020-01-16T00:00Z", MeanOver::day)).rows.empty());
}

TEST_CASE("month means") {
  Winter winter;
  const auto rows = run(winter.book, request("2020-01-01T00:00Z", "2020-03-31T00:00Z", MeanOver::month)).rows;
  REQUIRE(rows.size() == 3);
  // January: 14 days of 1, 0.9375, 15 days of 0.5, 0.5625 (18 h of 0.5, then up to 1).
  CHECK(rows[0].time == at("2020-01-01T00:00Z"));
  CHECK(rows[0].discharge_m3s.value() == Approx(23.0 / 31).epsilon(1e-13));
  const double spread = 14 * 0.05 + (18 * 0.05 + 6 * 0.04) / 24 + 15 * 0.03 + (18 * 0.03 + 6 * 0.04) / 24;
  CHECK(rows[0].u95_pct == Approx(u95(spread / 23)));
  CHECK(rows[0].share == 1);
  CHECK(rows[0].quality == Quality::unchecked);
  CHECK(rows[0].curves == std::vector<int>{1});
  CHECK(rows[0].flags == 0);
  CHECK(rows[1].discharge_m3s.value() == Approx((9 * 1 + 20 * 2) / 29.0).epsilon(1e-13));
  CHECK(rows[1].curves == std::vector<int>{1, 2});
  // March has one day of 18 h, whose share is under 0.8.
  CHECK(!rows[2].discharge_m3s);
  CHECK(rows[2].quality == Quality::missing);
  CHECK(rows[2].flags == bit(Flag::gap));
}

TEST_CASE("months are given that begin inside, whole") {
  Winter winter;
  const auto months = [&](const std::string& from, const std::string& until) {
    return run(winter.book, request(from, until, MeanOver::month)).rows;
  };
  CHECK(months("2020-01-02T00:00Z", "2020-02-01T00:00Z").empty());
  const auto february = months("2020-01-02T00:00Z", "2020-02-01T00:01Z");
  REQUIRE(february.size() == 1);
  CHECK(february[0].time == at("2020-02-01T00:00Z"));
  CHECK(february[0].discharge_m3s.value() == Approx(49.0 / 29).epsilon(1e-13));
  CHECK(months("2020-01-01T00:00Z", "2020-02-01T00:00Z").size() == 1);
}

TEST_CASE("the mean of a water year with days missing") {
  store::Settings settings;
  settings.least_share_of_day = 0.1;
  Winter winter(settings);
  const auto rows =
      run(winter.book, request("2020-01-01T00:00Z", "2020-01-02T00:00Z", MeanOver::water_year)).rows;
  REQUIRE(rows.size() == 1);
  // With a tenth of a day enough, 1 March counts with its 18 h of 2 m3/s.
  CHECK(rows[0].share == Approx((31 + 29 + 0.75) / 366).epsilon(1e-14));
  CHECK(rows[0].discharge_m3s.value() == Approx((23 + 49 + 0.75 * 2) / 60.75).epsilon(1e-13));
  CHECK(has(rows[0].flags, Flag::gap));
  CHECK(rows[0].quality == Quality::estimate);
  const auto usual = Winter().book.settings().least_share_of_day;
  CHECK(rows[0].share < usual);
  CHECK(!run(Winter().book, request("2020-01-01T00:00Z", "2020-01-02T00:00Z", MeanOver::water_year))
             .rows.at(0)
             .discharge_m3s);
}

TEST_CASE("no flow is said of a month only where it all is 0") {
  const auto month_of = [](std::int64_t first_day_mm) {
    SmallBook small({period(1, "2020-01-01T00:00Z", "")},
                    readings("2020-01-01T00:00Z", "2020-02-02T00:00Z", 6,
                             [=](std::int64_t hours) { return hours < 240 ? first_day_mm : -200; }));
    return run(small.book, request("2020-01-01T00:00Z", "2020-02-01T00:00Z", MeanOver::month)).rows.at(0);
  };
  CHECK(month_of(-100).discharge_m3s == 0.0);
  CHECK(has(month_of(-100).flags, Flag::no_flow));
  CHECK(month_of(-100).u95_pct == 0);
  CHECK(month_of(500).discharge_m3s.value() > 0.1);
  CHECK(!has(month_of(500).flags, Flag::no_flow));
}

TEST_CASE("what was published: the newest of each time") {
  Winter winter;
  CHECK_THROWS_WITH(run(winter.book, request("2020-01-01T00:00Z", "2020-03-01T00:00Z", MeanOver::none, true)),
                    Catch::Matchers::Contains("nothing of R-1 is published"));
  const int first = winter.publish("2020-01-01T00:00Z", "2020-02-15T00:00Z");
  add_edition(winter.book,
              {period(1, "2020-01-01T00:00Z", "2020-02-10T00:00Z"), period(3, "2020-02-10T00:00Z", "")});
  const int second = winter.publish("2020-02-10T00:00Z", "2020-02-20T00:00Z");

  const auto instants =
      run(winter.book, request("2020-02-09T18:00Z", "2020-02-10T01:00Z", MeanOver::none, true));
  CHECK(instants.head.publications == std::vector<int>{first, second});
  CHECK(instants.head.edition == 0);
  REQUIRE(instants.rows.size() == 2);
  CHECK(instants.rows[0].units == 1000);
  CHECK(instants.rows[0].discharge_m3s == 1.0);
  CHECK(instants.rows[0].u95_pct == 10.3);
  CHECK(instants.rows[0].quality == Quality::good);
  CHECK(instants.rows[1].units == 10'000);
  CHECK(instants.rows[1].curves == std::vector<int>{3});

  const auto days = run(winter.book, request("2020-02-08T00:00Z", "2020-02-12T00:00Z", MeanOver::day, true));
  REQUIRE(days.rows.size() == 4);
  CHECK(days.rows[1].units == 1000);
  CHECK(days.rows[2].units == 10'000);
  CHECK(days.rows[2].time == at("2020-02-10T00:00Z"));

  const auto months =
      run(winter.book, request("2020-01-01T00:00Z", "2020-02-02T00:00Z", MeanOver::month, true));
  REQUIRE(months.rows.size() == 2);
  // The published days of January are 14 of 1.00, 0.938, 15 of 0.500, 0.563 (three decimals).
  CHECK(months.rows[0].discharge_m3s.value() == Approx((14 + 0.938 + 7.5 + 0.563) / 31).epsilon(1e-13));
  CHECK(months.rows[0].quality == Quality::good);
  CHECK(!months.rows[1].discharge_m3s);  // 19 days of 29 were published
  CHECK(months.rows[1].share == Approx(19.0 / 29));
  // The last month draws on the second publication, beyond what was asked for.
  CHECK(months.head.publications == std::vector<int>{first, second});
  CHECK(run(winter.book, request("2020-01-01T00:00Z", "2020-01-05T00:00Z", MeanOver::none, true))
            .head.publications == std::vector<int>{first});
}

TEST_CASE("publications of different decimals are given in the finer ones") {
  Winter winter;
  store::Settings coarse;
  coarse.published_digits = 2;
  coarse.published_decimals = 1;
  winter.set(coarse);
  (void)winter.publish("2020-01-01T00:00Z", "2020-01-20T00:00Z");
  winter.set({});
  (void)winter.publish("2020-01-18T00:00Z", "2020-01-25T00:00Z");
  const auto series =
      run(winter.book, request("2020-01-01T00:00Z", "2020-01-25T00:00Z", MeanOver::day, true));
  CHECK(series.head.decimals == 3);
  CHECK(series.head.digits == 3);
  REQUIRE(series.rows.size() == 24);
  CHECK(series.rows[0].units == 1000);
  CHECK(series.rows[14].units == 900);  // 0.9375 as 0.9
  CHECK(series.rows[14].discharge_m3s == 0.9);
  CHECK(series.rows[20].units == 500);
}

TEST_CASE("as known at an act, a series stays the same whatever comes later") {
  Winter winter;
  (void)winter.publish("2020-01-01T00:00Z", "2020-02-15T00:00Z");
  const Known then{winter.book.newest_act()};
  std::vector<SeriesRequest> asked;
  for (const auto mean : {MeanOver::none, MeanOver::day, MeanOver::month, MeanOver::water_year}) {
    for (const bool published : {false, true}) {
      asked.push_back(request("2020-01-01T00:00Z", "2020-03-01T00:00Z", mean, published));
      asked.back().known = then;
    }
  }
  std::vector<Series> before;
  for (const auto& each : asked) before.push_back(run(winter.book, each));

  add_edition(winter.book, {period(3, "2020-01-01T00:00Z", "")});
  {
    auto writer = winter.book.begin(head("late levelling and correction"));
    const auto file = writer.add_file("late.csv", 1, std::string(64, '0'), "stage");
    writer.add(zero("2020-01-10T00:00Z", 99), {file, 2});
    (void)writer.add_stage({kStation, store::StageUnit::metre, 3, {reading("2020-01-20T00:00Z", 3000)}}, file,
                           true);
    writer.commit();
  }
  store::Settings other;
  other.least_share_of_day = 0.1;
  other.published_digits = 1;
  other.longest_gap_minutes = 60;
  winter.set(other);
  (void)winter.publish("2020-01-05T00:00Z", "2020-02-01T00:00Z");

  for (std::size_t i = 0; i < asked.size(); ++i) {
    CAPTURE(i);
    const auto after = run(winter.book, asked[i]);
    CHECK(after.head.edition == before[i].head.edition);
    CHECK(after.head.data_version == before[i].head.data_version);
    CHECK(after.head.known_act == then.act);
    CHECK(after.head.publications == before[i].head.publications);
    REQUIRE(!after.rows.empty());
    REQUIRE(after.rows.size() == before[i].rows.size());
    CHECK(std::equal(after.rows.begin(), after.rows.end(), before[i].rows.begin(), equal));
    // And the later acts do count where they may.
    auto now = asked[i];
    now.known = {};
    const auto newest = run(winter.book, now);
    CHECK_FALSE((newest.rows.size() == after.rows.size() &&
                 std::equal(after.rows.begin(), after.rows.end(), newest.rows.begin(), equal)));
  }
}

TEST_CASE("an older edition and data version may be asked for") {
  Winter winter;
  const auto data = winter.book.data_version(kStation);
  add_edition(winter.book, {period(3, "2020-01-01T00:00Z", "")});
  add_stage(winter.book, {reading("2020-03-05T00:00Z", 1000)});
  auto asked = request("2020-02-20T00:00Z", "2020-04-01T00:00Z");
  const auto now = run(winter.book, asked);
  CHECK(now.head.edition == 2);
  CHECK(now.rows.back().time == at("2020-03-05T00:00Z"));
  CHECK(now.rows.front().discharge_m3s.value() == Approx(10).epsilon(1e-14));
  asked.edition = 1;
  asked.data_version = data;
  const auto then = run(winter.book, asked);
  CHECK(then.head.edition == 1);
  CHECK(then.head.data_version == data);
  CHECK(then.rows.back().time == at("2020-03-01T18:00Z"));
  CHECK(then.rows.front().discharge_m3s.value() == Approx(2).epsilon(1e-14));
}

TEST_CASE("a series that cannot be") {
  SmallBook small({}, {reading("2020-01-01T01:00Z", 1000)});
  auto asked = request("2020-01-01T00:00Z", "2020-01-02T00:00Z");
  CHECK_THROWS_WITH(run(small.book, asked), Catch::Matchers::Contains("no edition yet"));
  asked.station = "R-2";
  CHECK_THROWS_WITH(run(small.book, asked), Catch::Matchers::Contains("no station R-2"));
}

TEST_CASE("words of means") {
  for (const auto mean : {MeanOver::none, MeanOver::day, MeanOver::month, MeanOver::water_year}) {
    CHECK(publish::parse_mean_over(publish::word(mean)) == mean);
  }
  CHECK(publish::word(MeanOver::water_year) == "water-year");
  CHECK(!publish::parse_mean_over("week"));
}
