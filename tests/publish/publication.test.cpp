// Figures of publications worked out by hand.

#include <catch2/catch.hpp>

#include "publish/coverage.hpp"
#include "small_book.hpp"

using namespace small_book;
using Catch::Matchers::Contains;
using publish::PublicationState;

namespace {

/// Three days, hourly, depth 1 m: 2 m3/s through curve 2. One reading is missing, one suspect.
std::vector<store::StageReading> three_days() {
  auto all = readings("2020-01-01T00:00Z", "2020-01-04T00:00Z", 1, [](std::int64_t) { return 1000; });
  all[30].value = store::kMissing;
  all[31].quality = Quality::suspect;
  return all;
}

store::Publication publication(int number, const std::string& from, const std::string& until) {
  store::Publication made;
  made.number = number;
  made.from = at(from);
  made.until = at(until);
  return made;
}

}  // namespace

TEST_CASE("a publication holds the whole days of its replay, rounded") {
  SmallBook small({period(2, "2020-01-01T00:00Z", "")}, three_days());
  const auto replay = small.keep("2020-01-01T06:00Z", "2020-01-03T12:00Z");
  const auto made = publish::make_publication(small.book, replay);
  CHECK(made.station == kStation);
  CHECK(made.replay == replay.number);
  CHECK(made.from == at("2020-01-02T00:00Z"));
  CHECK(made.until == at("2020-01-03T00:00Z"));
  CHECK(made.decimals == 3);
  REQUIRE(made.months.size() == 1);
  const auto& month = made.months[0];
  REQUIRE(month.time_ms.size() == 24);
  CHECK(month.time_ms.front() == to_ms(at("2020-01-02T00:00Z")));
  CHECK(month.value[0] == 2000);
  CHECK(month.u95_tenth_pct[0] == 103);
  CHECK(month.quality[0] == Quality::good);
  CHECK(month.curve[0] == 2);
  CHECK(month.flags[0] == 0);
  // 06:00: the reading is missing.
  CHECK(!month.value[6]);
  CHECK(month.u95_tenth_pct[6] == 0);
  CHECK(month.quality[6] == Quality::missing);
  CHECK(month.flags[6] == bit(Flag::gap));
  CHECK(month.curve[6] == 0);
  CHECK(month.quality[7] == Quality::suspect);
  REQUIRE(made.days.size() == 1);
  CHECK(format_day({made.days[0].day}) == "2020-01-02");
  CHECK(made.days[0].mean == 2000);
  CHECK(made.days[0].u95_tenth_pct == 103);
  CHECK(made.days[0].quality == Quality::suspect);
  CHECK(made.days[0].share == 1);
  CHECK(made.days[0].curves == std::vector<int>{2});
}

TEST_CASE("a replay without a whole day is no publication") {
  SmallBook small({period(2, "2020-01-01T00:00Z", "")}, three_days());
  const auto replay = small.keep("2020-01-01T06:00Z", "2020-01-02T12:00Z");
  CHECK_THROWS_WITH(publish::make_publication(small.book, replay), Contains("no whole station day"));
}

TEST_CASE("days are those of the station's clock") {
  StationClock clock;
  clock.offset.minutes = std::chrono::minutes(-180);
  clock.day_start = std::chrono::minutes(420);  // 07:00 local, 10:00 UTC
  SmallBook small({period(2, "2020-01-01T00:00Z", "")}, three_days(), clock);
  const auto made =
      publish::make_publication(small.book, small.keep("2020-01-01T00:00Z", "2020-01-04T00:00Z"));
  CHECK(made.from == at("2020-01-01T10:00Z"));
  CHECK(made.until == at("2020-01-03T10:00Z"));
  CHECK(made.days.size() == 2);
}

TEST_CASE("flows that a replay did not keep are not published") {
  SmallBook small({period(2, "2020-01-01T00:00Z", "")}, three_days());
  auto replay = small.keep("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  const auto kind_of = [&] {
    try {
      (void)publish::make_publication(small.book, replay);
    } catch (const store::StoreError& error) {
      return error.kind();
    }
    return store::StoreError::Kind::io;
  };
  SECTION("a digest differs") {
    replay.months[0].sha256[5] ^= 1;
    CHECK(kind_of() == store::StoreError::Kind::damaged);
  }
  SECTION("a month is missing") {
    replay.months.clear();
    CHECK(kind_of() == store::StoreError::Kind::damaged);
  }
  SECTION("a month was kept that has no reading") {
    replay.months.push_back({UtcMonth{replay.months[0].month.number + 1}, 0, replay.months[0].sha256});
    CHECK(kind_of() == store::StoreError::Kind::damaged);
  }
}

TEST_CASE("a publication is made again as known when it was made") {
  SmallBook small({period(2, "2020-01-01T00:00Z", "")}, three_days());
  const auto replay = small.keep("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  const auto kept = *small.book.publication(kStation, small.publish(replay));
  store::Settings coarse;
  coarse.published_digits = 1;
  coarse.published_decimals = 1;
  small.set(coarse);
  const auto again = publish::make_publication(small.book, replay, {}, Known{kept.act - 1});
  CHECK(again.decimals == 3);
  CHECK(again.months[0].value == kept.months[0].value);
  const auto now = publish::make_publication(small.book, replay);
  CHECK(now.decimals == 1);
  CHECK(now.months[0].value[0] == 20);
}

TEST_CASE("the newest publication speaks for each time") {
  const std::vector<store::Publication> all = {publication(1, "2020-01-01T00:00Z", "2020-01-10T00:00Z"),
                                               publication(2, "2020-01-03T00:00Z", "2020-01-05T00:00Z"),
                                               publication(3, "2020-01-12T00:00Z", "2020-01-14T00:00Z"),
                                               publication(4, "2020-01-02T00:00Z", "2020-01-07T00:00Z")};
  const auto covered = publish::coverage(all, at("2020-01-01T12:00Z"), at("2020-01-13T00:00Z"));
  REQUIRE(covered.size() == 4);
  const auto is = [](const publish::Coverage& stretch, const std::string& from, const std::string& until,
                     int number) {
    return stretch.from == at(from) && stretch.until == at(until) && stretch.publication == number;
  };
  CHECK(is(covered[0], "2020-01-01T12:00Z", "2020-01-02T00:00Z", 1));
  CHECK(is(covered[1], "2020-01-02T00:00Z", "2020-01-07T00:00Z", 4));
  CHECK(is(covered[2], "2020-01-07T00:00Z", "2020-01-10T00:00Z", 1));
  CHECK(is(covered[3], "2020-01-12T00:00Z", "2020-01-13T00:00Z", 3));
  CHECK(publish::coverage(all, at("2020-01-10T00:00Z"), at("2020-01-12T00:00Z")).empty());
  CHECK(publish::coverage(all, at("2020-01-02T00:00Z"), at("2020-01-02T00:00Z")).empty());
  CHECK(publish::state_of(all[0], all) == PublicationState::published);
  CHECK(publish::state_of(all[1], all) == PublicationState::superseded);
  CHECK(publish::state_of(all[2], all) == PublicationState::published);
  CHECK(publish::state_of(all[3], all) == PublicationState::published);
}

TEST_CASE("the publication at a time, as known") {
  SmallBook small({period(2, "2020-01-01T00:00Z", "")}, three_days());
  const int first = small.publish("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  const Known before{small.book.newest_act()};
  const int second = small.publish("2020-01-02T00:00Z", "2020-01-03T00:00Z");
  const auto speaks = [&](const std::string& time, Known known = {}) {
    return publish::publication_at(small.book, kStation, at(time), known);
  };
  CHECK(speaks("2020-01-01T12:00Z") == first);
  CHECK(speaks("2020-01-02T00:00Z") == second);
  CHECK(speaks("2020-01-02T23:59Z") == second);
  CHECK(speaks("2020-01-03T00:00Z") == first);
  CHECK(speaks("2020-01-02T12:00Z", before) == first);
  CHECK(!speaks("2020-01-04T00:00Z"));
  CHECK(!speaks("2020-01-01T12:00Z", Known{1}));
}
