// A sound book checks as sound; a book changed behind the program's back is found out, and the rest of it
// still checked.

#include <algorithm>
#include <catch2/catch.hpp>

#include "publish/check.hpp"
#include "small_book.hpp"
#include "tampering.hpp"

using namespace small_book;

namespace {

/// Hourly readings of 1 m depth over January and a part of February, curves 1 and 2, all published; then a
/// second replay and publication of some days.
struct PublishedBook : SmallBook {
  PublishedBook()
      : SmallBook({period(1, "2020-01-01T00:00Z", "2020-01-20T00:00Z"),
                   period(2, "2020-01-20T00:00Z", "", std::chrono::hours(12))},
                  readings("2020-01-01T00:00Z", "2020-02-05T00:00Z", 1, [](std::int64_t) { return 1000; })) {
    (void)publish("2020-01-01T00:00Z", "2020-02-05T00:00Z");
    add_edition(book, {period(1, "2020-01-01T00:00Z", "")});
    (void)publish("2020-01-28T00:00Z", "2020-02-03T00:00Z");
  }
};

bool holds(const publish::CheckReport& report, const std::string& text) {
  return std::any_of(report.damage.begin(), report.damage.end(), [&](const store::Damage& damage) {
    return damage.text.find(text) != std::string::npos;
  });
}

std::string all_of(const publish::CheckReport& report) {
  std::string text;
  for (const auto& damage : report.damage) text += damage.table + ": " + damage.text + "\n";
  return text;
}

publish::CheckReport after(const SmallBook& small, const std::string& sql) {
  tampering::tamper(small.path.text(), sql);
  const auto book = store::Book::open_to_read(small.path.text());
  auto report = publish::check(book);
  UNSCOPED_INFO(all_of(report));
  return report;
}

}  // namespace

TEST_CASE("a sound book") {
  PublishedBook small;
  std::vector<std::string> told;
  publish::CheckOptions options;
  options.progress = [&](const std::string& what, std::int64_t done, std::int64_t all) {
    CHECK(done <= all);
    if (told.empty() || told.back() != what) told.push_back(what);
  };
  const auto report = publish::check(small.book, options);
  CAPTURE(all_of(report));
  CHECK(report.damage.empty());
  CHECK(report.acts == small.book.newest_act());
  CHECK(report.replays == 2);
  CHECK(report.replay_months == 4);
  CHECK(report.publications == 2);
  CHECK(report.published_values == 35 * 24 + 35 + 6 * 24 + 6);
  CHECK(report.curves == 0);
  CHECK(report.out_of_date.empty());
  CHECK(told == std::vector<std::string>{"reading rows", "replay 1 of R-1", "replay 2 of R-1",
                                         "publication 1 of R-1", "publication 2 of R-1"});
}

TEST_CASE("a sound book stays sound when settings, editions and data move on") {
  PublishedBook small;
  store::Settings other;
  other.longest_gap_minutes = 30;
  other.published_digits = 1;
  other.published_decimals = 0;
  other.estimate_above_gauged = 0.1;
  small.set(other);
  add_edition(small.book, {period(3, "2020-01-01T00:00Z", "")});
  auto writer = small.book.begin(head("late levelling, another clock"));
  const auto file = writer.add_file("late.csv", 1, std::string(64, '0'), "gauge zero");
  writer.add(zero("2020-01-10T00:00Z", 99), {file, 2});
  Station station = small.book.station(kStation)->value;
  station.clock.day_start = std::chrono::minutes(60);
  writer.add(station, {file, 3}, true);
  writer.commit();
  const auto report = publish::check(small.book);
  CAPTURE(all_of(report));
  CHECK(report.damage.empty());
  CHECK(report.publications == 2);
}

TEST_CASE("the tampering of these tests leaves a book sound when it changes nothing") {
  const PublishedBook small;
  CHECK(after(small, "SELECT 1").damage.empty());
}

TEST_CASE("a published value that was changed") {
  const PublishedBook small;
  const auto report = after(small,
                            "UPDATE publication_month SET flow_values = replace(flow_values, '2000', '2010') "
                            "WHERE publication = 1 AND month = (SELECT min(month) FROM publication_month)");
  CHECK(holds(report, "R-1 publication 1: computed again, the values of 2020-01 differs"));
  CHECK(!holds(report, "publication 2: computed again"));
  CHECK(!holds(report, "replay"));
  CHECK(report.publications == 2);
}

TEST_CASE("a published day mean, its flags and share that were changed") {
  const PublishedBook small;
  const std::string where =
      " WHERE publication = 2 AND day = (SELECT max(day) FROM publication_day WHERE "
      "publication = 2)";
  const auto change = GENERATE(as<std::string>(), "mean = 1001", "mean = NULL", "u95_tenth_pct = 104",
                               "flags = 1", "quality = 'poor'", "share = 0.99", "curves = '[2]'");
  CAPTURE(change);
  const auto report = after(small, "UPDATE publication_day SET " + change + where);
  CHECK(holds(report, "R-1 publication 2: computed again, the mean of 2020-02-02 differs"));
  CHECK(!holds(report, "publication 1: computed again"));
}

TEST_CASE("a digest of a replay that was changed: its publication is not computed again") {
  const PublishedBook small;
  const auto report = after(small,
                            "UPDATE replay_month SET sha256 = replace(sha256, substr(sha256, 1, 4), "
                            "'0000') WHERE replay = 1 AND month = (SELECT max(month) FROM replay_month)");
  CHECK(holds(report, "R-1 replay 1: 2020-02 computed again gives other flows"));
  CHECK(!holds(report, "2020-01 computed again"));
  CHECK(!holds(report, "publication 1"));
  CHECK(report.publications == 1);
  CHECK(report.replays == 2);
}

TEST_CASE("a month of a replay that was taken away") {
  const PublishedBook small;
  const auto report = after(small,
                            "DELETE FROM replay_month WHERE replay = 2 AND month = (SELECT max(month) "
                            "FROM replay_month)");
  CHECK(holds(report, "R-1 replay 2: 1 months kept, 2 computed again"));
}

TEST_CASE("a coefficient that was changed: every flow through its curve differs") {
  const PublishedBook small;
  const auto report = after(small, "UPDATE curve_control SET flow_scale = 2.0000001 WHERE curve = 2");
  CHECK(holds(report, "R-1 replay 1: 2020-01 computed again gives other flows"));
  CHECK(holds(report, "R-1 replay 1: 2020-02 computed again gives other flows"));
  CHECK(!holds(report, "replay 2"));  // curve 1 alone
  CHECK(report.publications == 1);
}

TEST_CASE("a gauge zero that was changed") {
  const PublishedBook small;
  const auto report = after(small, "UPDATE gauge_zero SET zero_ticks = zero_ticks + 1");
  CHECK(holds(report, "R-1 replay 1: 2020-01 computed again gives other flows"));
  CHECK(holds(report, "R-1 replay 2: 2020-01 computed again gives other flows"));
  CHECK(report.publications == 0);
}

TEST_CASE("a stage piece that was changed") {
  const PublishedBook small;
  const auto report =
      after(small, "UPDATE stage_piece SET stage_values = replace(stage_values, '1000', '1001')");
  CHECK(holds(report, "R-1 replay 1"));
  CHECK(!report.damage.empty());
}

TEST_CASE("a book that cannot be computed with is damage, not the end of the program") {
  const PublishedBook small;
  SECTION("a curve without bands") {
    const auto report = after(small, "DELETE FROM curve_band WHERE curve = 2");
    CHECK(holds(report, "R-1 curve 2: it has no band"));
    CHECK(report.replays == 1);  // the other edition does without it
    CHECK(report.publications == 1);
  }
  SECTION("a curve without controls") {
    const auto report = after(small, "DELETE FROM curve_control WHERE curve = 2");
    CHECK(holds(report, "R-1 curve 2: it has no control"));
    CHECK(report.replays == 1);
  }
  SECTION("bands out of order") {
    const auto report = after(small, "UPDATE curve_band SET level_m = 200 WHERE curve = 1 AND number = 1");
    CHECK(holds(report, "R-1 curve 1: its bands do not rise"));
    CHECK(report.replays == 0);
  }
  SECTION("periods that overlap") {
    const auto report =
        after(small, "UPDATE period SET until_ms = until_ms + 1 WHERE edition = 1 AND number = 1");
    CHECK(holds(report, "R-1 edition 1: its periods overlap"));
    CHECK(report.replays == 1);
  }
  SECTION("a curve that is gone") {
    const auto report = after(small, "PRAGMA foreign_keys = OFF; DELETE FROM curve WHERE number = 2");
    CHECK(holds(report, "R-1 replay 1: station R-1 has no curve 2, which its edition 1 names"));
    CHECK(report.publications == 1);
  }
  SECTION("a replay that is gone") {
    const auto report = after(small, "PRAGMA foreign_keys = OFF; DELETE FROM replay WHERE number = 2");
    CHECK(holds(report, "R-1 publication 2: its replay 2 is not there"));
    CHECK(report.publications == 1);
  }
  SECTION("figures that cannot be read") {
    const auto report = after(small, "UPDATE publication_month SET flow_values = '[1' WHERE publication = 1");
    CHECK(holds(report, "R-1 publication 1: "));
    CHECK(report.publications == 1);
  }
}
