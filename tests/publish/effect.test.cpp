// What an adoption would change, worked out by hand.

#include <catch2/catch.hpp>

#include "publish/effect.hpp"
#include "small_book.hpp"

using namespace small_book;

namespace {

/// Ten whole days of 1 m depth, hourly; curve 1 throughout.
SmallBook ten_days(const std::vector<Period>& periods = {period(1, "2020-01-01T00:00Z", "")}) {
  return SmallBook(periods,
                   readings("2020-01-01T00:00Z", "2020-01-11T01:00Z", 1, [](std::int64_t) { return 1000; }));
}

publish::Effect effect(const SmallBook& small, const std::vector<history::Adoption>& adopted) {
  const auto view = history::view_of(small.book, kStation);
  const auto result =
      history::adopt(view.edition ? view.edition->periods : std::vector<Period>{}, adopted, true);
  REQUIRE(result.refusals.empty());
  return publish::effect_of(small.book, view, result.periods, adopted);
}

history::Adoption adoption(std::optional<int> curve, const std::string& from, const std::string& until,
                           bool ends_open = false) {
  return {period(curve, from, until), ends_open};
}

}  // namespace

TEST_CASE("a stretch given to another curve") {
  const auto small = ten_days();
  // Noon of the 3rd to the begin of the 6th: half a day and two days at twice the flow.
  const auto changed = effect(small, {adoption(2, "2020-01-03T12:00Z", "2020-01-06T00:00Z")});
  REQUIRE(changed.stretches.size() == 1);
  const auto& stretch = changed.stretches[0];
  CHECK(stretch.from == at("2020-01-03T12:00Z"));
  CHECK(stretch.until == at("2020-01-06T00:00Z"));
  CHECK(stretch.curve == 2);
  CHECK(stretch.days == 3);
  CHECK(stretch.published_days == 0);
  CHECK(stretch.changed_days == 3);
  CHECK(stretch.beyond_5_pct == 3);
  CHECK(stretch.beyond_10_pct == 3);
  CHECK(stretch.appeared == 0);
  CHECK(stretch.disappeared == 0);
  CHECK(stretch.volume_change_pct.value() == Approx(100 * (5.5 / 3 - 1)));
  CHECK(stretch.largest_change_pct.value() == Approx(100));
  CHECK(format_day(stretch.largest_on) == "2020-01-04");
  CHECK(changed.publications.empty());
}

TEST_CASE("an open stretch ends with the record") {
  const auto small = ten_days();
  const auto changed = effect(small, {adoption(2, "2020-01-09T00:00Z", "", true)});
  REQUIRE(changed.stretches.size() == 1);
  CHECK(changed.stretches[0].until == at("2020-01-11T00:00:00.001Z"));
  CHECK(changed.stretches[0].days == 2);  // the 11th has an instant only
  CHECK(changed.stretches[0].changed_days == 2);
}

TEST_CASE("flows appear and disappear") {
  const auto small =
      ten_days({period(1, "2020-01-01T00:00Z", "2020-01-04T00:00Z"), period(1, "2020-01-06T00:00Z", "")});
  const auto changed = effect(small, {adoption({}, "2020-01-02T00:00Z", "2020-01-03T00:00Z"),
                                      adoption(2, "2020-01-03T00:00Z", "2020-01-06T00:00Z")});
  REQUIRE(changed.stretches.size() == 2);
  CHECK(!changed.stretches[0].curve);
  CHECK(changed.stretches[0].days == 1);
  CHECK(changed.stretches[0].disappeared == 1);
  CHECK(changed.stretches[0].changed_days == 1);
  CHECK(!changed.stretches[0].volume_change_pct);
  CHECK(!changed.stretches[0].largest_change_pct);
  CHECK(changed.stretches[1].days == 3);
  CHECK(changed.stretches[1].appeared == 2);
  CHECK(changed.stretches[1].changed_days == 3);
  CHECK(changed.stretches[1].beyond_10_pct == 1);
  CHECK(changed.stretches[1].volume_change_pct.value() == Approx(100));
}

TEST_CASE("the first edition: all appears") {
  const auto small = ten_days({});
  const auto changed = effect(small, {adoption(1, "2019-01-01T00:00Z", "", true)});
  REQUIRE(changed.stretches.size() == 1);
  CHECK(changed.stretches[0].from == at("2020-01-01T00:00Z"));  // the begin of the record
  CHECK(changed.stretches[0].days == 10);
  CHECK(changed.stretches[0].appeared == 10);
}

TEST_CASE("what was published stands before what the newest edition says") {
  auto small = ten_days();
  const int first = small.publish("2020-01-01T00:00Z", "2020-01-05T00:00Z");
  const int second = small.publish("2020-01-04T00:00Z", "2020-01-07T00:00Z");
  add_edition(small.book, {period(2, "2020-01-01T00:00Z", "")});
  // Curve 2 for good: the newest edition has it, but what was published was curve 1's.
  const auto changed = effect(small, {adoption(2, "2020-01-04T00:00Z", "2020-01-09T00:00Z")});
  REQUIRE(changed.stretches.size() == 1);
  CHECK(changed.stretches[0].days == 5);
  CHECK(changed.stretches[0].published_days == 3);
  CHECK(changed.stretches[0].changed_days == 3);
  CHECK(changed.publications == std::vector<int>{second});  // the first holds none that still counts
  const auto back = effect(small, {adoption(1, "2020-01-03T00:00Z", "2020-01-09T00:00Z")});
  CHECK(back.stretches[0].published_days == 4);
  CHECK(back.stretches[0].changed_days == 2);
  CHECK(back.stretches[0].largest_change_pct.value() == Approx(-50));
  CHECK(back.publications.empty());
  const auto both = effect(small, {adoption(3, "2020-01-03T00:00Z", "2020-01-09T00:00Z")});
  CHECK(both.publications == std::vector<int>{first, second});
}

TEST_CASE("figures of publications with other decimals are compared as flows") {
  store::Settings coarse;
  coarse.published_decimals = 1;
  auto small = ten_days();
  small.set(coarse);
  (void)small.publish("2020-01-01T00:00Z", "2020-01-05T00:00Z");
  small.set({});
  add_edition(small.book, {period(2, "2020-01-01T00:00Z", "")});
  const auto same = effect(small, {adoption(1, "2020-01-01T00:00Z", "2020-01-05T00:00Z")});
  CHECK(same.stretches[0].published_days == 4);
  CHECK(same.stretches[0].changed_days == 0);
  CHECK(same.stretches[0].volume_change_pct == 0.0);
}

TEST_CASE("exactly five percent is not beyond five percent") {
  auto small = ten_days();
  add_curves(small.book, {proportional(1.05), proportional(1.051), proportional(1.1), proportional(1.11)});
  const auto beyond = [&](int curve) {
    const auto stretch =
        effect(small, {adoption(curve, "2020-01-02T00:00Z", "2020-01-03T00:00Z")}).stretches.at(0);
    return std::pair(stretch.beyond_5_pct, stretch.beyond_10_pct);
  };
  store::Settings fine;
  fine.published_digits = 5;
  small.set(fine);
  CHECK(beyond(4) == std::pair<std::int64_t, std::int64_t>(0, 0));
  CHECK(beyond(5) == std::pair<std::int64_t, std::int64_t>(1, 0));
  CHECK(beyond(6) == std::pair<std::int64_t, std::int64_t>(1, 0));
  CHECK(beyond(7) == std::pair<std::int64_t, std::int64_t>(1, 1));
}

TEST_CASE("flow where there was none counts as beyond any share") {
  SmallBook small({period(1, "2020-01-01T00:00Z", "")},
                  readings("2020-01-01T00:00Z", "2020-01-04T00:00Z", 1, [](std::int64_t) { return -100; }));
  auto lower = curve({control(ControlKind::channel, 99, 1, 1)});
  add_curves(small.book, {lower});
  const auto changed = effect(small, {adoption(4, "2020-01-02T00:00Z", "2020-01-03T00:00Z")});
  CHECK(changed.stretches[0].changed_days == 1);
  CHECK(changed.stretches[0].appeared == 0);
  CHECK(changed.stretches[0].beyond_5_pct == 1);
  CHECK(changed.stretches[0].beyond_10_pct == 1);
  CHECK(!changed.stretches[0].largest_change_pct);
  CHECK(!changed.stretches[0].volume_change_pct);
}

TEST_CASE("beyond the record nothing changes") {
  const auto small = ten_days();
  const auto later = effect(small, {adoption(2, "2021-01-01T00:00Z", "2021-02-01T00:00Z")});
  REQUIRE(later.stretches.size() == 1);
  CHECK(later.stretches[0].days == 0);
  CHECK(later.stretches[0].from <= later.stretches[0].until);
  const SmallBook empty({period(1, "2020-01-01T00:00Z", "")}, {});
  const auto none = effect(empty, {adoption(2, "2020-01-02T00:00Z", "2020-01-03T00:00Z")});
  REQUIRE(none.stretches.size() == 1);
  CHECK(none.stretches[0].days == 0);
}
