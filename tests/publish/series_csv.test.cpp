// A series as text.

#include <catch2/catch.hpp>
#include <sstream>

#include "publish/series.hpp"
#include "small_book.hpp"

using namespace small_book;
using publish::MeanOver;

namespace {

std::string csv(const store::Book& book, const publish::SeriesRequest& request, int offset_minutes = 0) {
  std::ostringstream out;
  publish::write_csv(book, request, UtcOffset{std::chrono::minutes(offset_minutes)}, out);
  return out.str();
}

publish::SeriesRequest request(MeanOver mean = MeanOver::none, bool published = false) {
  publish::SeriesRequest made;
  made.station = kStation;
  made.from = at("2020-01-01T12:00Z");
  made.until = at("2020-01-02T06:00Z");
  made.mean = mean;
  made.published = published;
  return made;
}

std::vector<std::string> lines(const std::string& text) {
  std::istringstream in(text);
  std::vector<std::string> all;
  for (std::string line; std::getline(in, line);) all.push_back(line);
  return all;
}

/// What follows the lines that start with #.
std::string body(const std::string& text) {
  std::string rest;
  for (const auto& line : lines(text)) {
    if (line.rfind('#', 0) != 0) rest += line + "\n";
  }
  return rest;
}

/// Two days, every 6 h; depth 1.23456 m in the first place, one reading missing.
SmallBook two_days() {
  auto stage = readings("2020-01-01T00:00Z", "2020-01-03T00:00Z", 6, [](std::int64_t) { return 1000; });
  stage[2].value = 1234;
  stage[3].value = store::kMissing;
  return SmallBook({period(1, "2020-01-01T00:00Z", "2020-01-02T00:00Z"),
                    period(2, "2020-01-02T00:00Z", "", std::chrono::hours(12))},
                   std::move(stage), {}, with_gap(720));
}

}  // namespace

TEST_CASE("rows of a working series") {
  const auto small = two_days();
  // 12:00: 1.234 m, sd 0.05 - 0.02 x 0.234 = 0.04532; 00:00 is the begin of the blend: all of curve 1.
  CHECK(body(csv(small.book, request(), 60)) ==
        "time,discharge_m3s,u95_pct,quality,curve,survey,flags\n"
        "2020-01-01T13:00:00+01:00,1.234,9.3,unchecked,1,S1,\n"
        "2020-01-01T19:00:00+01:00,,,missing,,,gap\n"
        "2020-01-02T01:00:00+01:00,1,10.3,estimate,2,S1,blended\n");
}

TEST_CASE("rows of day means and of published ones") {
  auto small = two_days();
  auto asked = request(MeanOver::day);
  asked.from = at("2020-01-01T00:00Z");
  asked.until = at("2020-01-03T00:00Z");
  // First day: 6 h of 1, 6 h to 1.234, 12 h back to 1: mean 1 + 0.234 x 9 / 24 = 1.08775; its sd
  // (6 x 0.05 + 18 (0.05 + 1.234 x 0.04532) / 2) / 24 / 1.08775 = 0.04801.
  // Second: the blend reaches 1.5 at 06:00 and 2 at 12:00; then 6 h of 2, and nothing after the last reading
  // at 18:00, so that three quarters are under the least share.
  CHECK(body(csv(small.book, asked)) ==
        "time,discharge_m3s,u95_pct,quality,curve,survey,flags,share\n"
        "2020-01-01,1.08775,9.9,unchecked,1,S1,,1.0000\n"
        "2020-01-02,,,missing,1 2,S1 S1,gap,0.7500\n");
  (void)small.publish("2020-01-01T00:00Z", "2020-01-03T00:00Z");
  asked.published = true;
  CHECK(body(csv(small.book, asked)) ==
        "time,discharge_m3s,u95_pct,quality,curve,survey,flags,share\n"
        "2020-01-01,1.09,9.9,good,1,S1,,1.0000\n"
        "2020-01-02,,,missing,1 2,S1 S1,gap,0.7500\n");
  CHECK(body(csv(small.book, request(MeanOver::none, true))) ==
        "time,discharge_m3s,u95_pct,quality,curve,survey,flags\n"
        "2020-01-01T12:00:00Z,1.23,9.3,good,1,S1,\n"
        "2020-01-01T18:00:00Z,,,missing,,,gap\n"
        "2020-01-02T00:00:00Z,1.00,10.3,estimate,2,S1,blended\n");
}

TEST_CASE("what stands above a series") {
  auto small = two_days();
  const auto has_line = [](const std::string& text, const std::string& wanted) {
    for (const auto& line : lines(text)) {
      if (line.find(wanted) != std::string::npos) return true;
    }
    return false;
  };
  const auto working = csv(small.book, request());
  CHECK(has_line(working, "# station R-1: Testing Weir"));
  CHECK(has_line(working, "# flow at every reading"));
  CHECK(has_line(working, "# from 2020-01-01T12:00:00Z until 2020-01-02T06:00:00Z (excluded)"));
  CHECK(has_line(working,
                 "# working record, not published: edition 1, data version 5, method version 1, as "
                 "known at act 5 ("));
  CHECK(has_line(working, "# " + publish::caution()));
  CHECK(!has_line(working, "published: publication"));

  (void)small.publish("2020-01-01T00:00Z", "2020-01-02T00:00Z");
  (void)small.publish("2020-01-02T00:00Z", "2020-01-03T00:00Z");
  const auto published = csv(small.book, request(MeanOver::none, true));
  CHECK(has_line(published, "# published: publications 1, 2; as known at act 9 ("));
  CHECK(!has_line(published, "not published"));
  CHECK(has_line(published, "# " + publish::caution()));
}

TEST_CASE("no line above the columns is long, or broken by a name") {
  SmallBook small({period(1, "2020-01-01T00:00Z", "")}, {reading("2020-01-01T13:00Z", 1000)});
  {
    auto writer = small.book.begin(head("a name"));
    const auto file = writer.add_file("name.csv", 1, std::string(64, '0'), "station");
    Station station = small.book.station(kStation)->value;
    station.name = "Weir\nat the \"Mill\",\r\n";
    for (int i = 0; i < 60; ++i) station.name += " upper";
    station.river = "Exe\nor Yarty";
    writer.add(station, {file, 2}, true);
    writer.commit();
  }
  for (const auto mean : {MeanOver::none, MeanOver::day, MeanOver::month, MeanOver::water_year}) {
    auto asked = request(mean);
    asked.from = at("2020-01-01T00:00Z");
    bool in_head = true;
    for (const auto& line : lines(csv(small.book, asked))) {
      CAPTURE(line);
      if (line.rfind("time,", 0) == 0) in_head = false;
      if (!in_head) continue;
      CHECK(line.rfind("# ", 0) == 0);
      CHECK(line.size() < 160);
    }
    CHECK(!in_head);
  }
  CHECK(csv(small.book, request()).find("# river Exe or Yarty\n") != std::string::npos);
}

TEST_CASE("a survey's name that a CSV reader would split stands in quotes") {
  TemporaryPath path("csv-quotes");
  auto book = store::Book::create(path.text(), head("new"));
  add_ground(book, {}, {zero("2020-01-01T00:00Z", 100)});
  {
    auto writer = book.begin(head("survey"));
    const auto file = writer.add_file("survey.csv", 1, std::string(64, '0'), "survey");
    Survey survey = book.survey(kStation, "S1")->value;
    survey.id = "spring, \"second\"";
    writer.add(survey, {file, 2}, {2, 3, 4});
    writer.commit();
  }
  auto made = proportional(1);
  made.survey = made.controls[0].survey = "spring, \"second\"";
  add_curves(book, {made});
  add_edition(book, {period(1, "2020-01-01T00:00Z", "")});
  add_stage(book, {reading("2020-01-01T13:00Z", 1000)});
  CHECK(body(csv(book, request())) ==
        "time,discharge_m3s,u95_pct,quality,curve,survey,flags\n"
        "2020-01-01T13:00:00Z,1,10.3,unchecked,1,\"spring, \"\"second\"\"\",\n");
}

TEST_CASE("the caution is one line in the head's width") {
  const std::string text = publish::caution();
  CHECK(text.find('\n') == std::string::npos);
  CHECK(text.size() + 2 < 160);
  for (const std::string word :
       {"estimates", "flood", "water supply", "dam safety", "responsible", "local rules"}) {
    CHECK_THAT(text, Catch::Matchers::Contains(word));
  }
}
