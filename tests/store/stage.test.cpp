// Stage: what is held after takes, repeats, contradictions and corrections; where each reading came from.

#include <catch2/catch.hpp>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::kMissing;
using store::StageBlock;
using store::StageOverlap;
using store::StageSeries;
using store::StageTaken;
using store::StageUnit;
using store::StoreError;

namespace {

struct Held {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));

  StageTaken take(const StageSeries& series, bool correct = false, const std::string& name = "stage.csv") {
    auto writer = book.begin(head("stage"));
    const auto file = writer.add_file(name, 1, std::string(64, '0'), "stage");
    const StageTaken taken = writer.add_stage(series, file, correct);
    writer.commit();
    return taken;
  }
  std::vector<StageOverlap> overlaps(const StageSeries& series, std::size_t most = 50) {
    return book.begin(head("look")).overlaps(series, most);
  }
  std::int64_t pieces() {
    auto db = plain::open(folder.path());
    return std::stoll(plain::one(db, "SELECT count(*) FROM stage_piece"));
  }
  StageBlock january(Known known = {}) {
    return book.stage_block(kStation, utc_month_of(at("2020-01-01T00:00Z")), known);
  }
};

/// "hh:mm=mm" of each reading of a day, with the quality where one is stated.
std::string text_of(const StageBlock& block) {
  std::string text;
  for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
    if (i > 0) text += ' ';
    text += format_time(from_ms(block.time_ms[i]), {}).substr(11, 5) + "=";
    text += block.ticks[i] == kMissing ? "none" : std::to_string(block.ticks[i] / 100'000);
    if (block.quality[i] != Quality::unchecked) text += "(" + std::string(word(block.quality[i])) + ")";
  }
  return text;
}

StageSeries of(const std::vector<std::pair<std::string, std::int64_t>>& readings) {
  StageSeries made{kStation, StageUnit::metre, 3, {}};
  std::int64_t line = 1;
  for (const auto& [time, mm] : readings) {
    made.readings.push_back({at("2020-01-01T" + time + "Z"), mm, Quality::unchecked, ++line});
  }
  return made;
}

}  // namespace

TEST_CASE("one piece a month, each with its own readings") {
  Held held;
  const StageTaken taken = held.take(series("2020-01-31T22:00Z", 5, 1000));
  CHECK(taken.added == 5);
  CHECK(taken.pieces == 2);
  CHECK(taken.repeated == 0);
  CHECK(taken.merged == 0);
  CHECK(text_of(held.january()) == "22:00=1000 23:00=1001");
  CHECK(text_of(held.book.stage_block(kStation, utc_month_of(at("2020-02-01T00:00Z")))) ==
        "00:00=1002 01:00=1003 02:00=1004");
  const auto months = held.book.stage_months(kStation);
  REQUIRE(months.size() == 2);
  CHECK(format_month(months[1]) == "2020-02");
  const auto span = held.book.stage_span(kStation);
  REQUIRE(span);
  CHECK(span->first == at("2020-01-31T22:00Z"));
  CHECK(span->second == at("2020-02-01T02:00Z"));
  CHECK_FALSE(held.book.stage_span("another"));
  CHECK(held.book.stage_months("another").empty());
}

TEST_CASE("readings keep their unit, decimals and quality as recorded, their times to the millisecond") {
  Held held;
  StageSeries feet{kStation, StageUnit::foot, 2, {}};
  feet.readings = {{at("2020-01-01T00:00:00.001Z"), 312, Quality::good, 2},
                   {at("2020-01-01T00:00:00.002Z"), -5, Quality::poor, 3},
                   {at("2020-01-01T00:00:00.500Z"), kMissing, Quality::missing, 4},
                   {at("2020-01-01T06:00:00.000Z"), 300, Quality::suspect, 9}};
  held.take(feet);
  const StageBlock block = held.january();
  CHECK(block.time_ms == std::vector<std::int64_t>{
                             to_ms(at("2020-01-01T00:00:00.001Z")), to_ms(at("2020-01-01T00:00:00.002Z")),
                             to_ms(at("2020-01-01T00:00:00.500Z")), to_ms(at("2020-01-01T06:00Z"))});
  CHECK(block.ticks == std::vector<std::int64_t>{95'097'600, -1'524'000, kMissing, 91'440'000});
  CHECK(block.quality ==
        std::vector<Quality>{Quality::good, Quality::poor, Quality::missing, Quality::suspect});
  const auto origin = held.book.reading_origin(kStation, at("2020-01-01T00:00:00.002Z"));
  REQUIRE(origin);
  CHECK(origin->recorded == "-0.05");
  CHECK(origin->unit == StageUnit::foot);
  CHECK(origin->quality == Quality::poor);
  CHECK(origin->line == 3);
  CHECK(held.book.reading_origin(kStation, at("2020-01-01T06:00Z"))->recorded == "3.00");
  CHECK(held.book.reading_origin(kStation, at("2020-01-01T06:00Z"))->line == 9);
  CHECK(held.book.reading_origin(kStation, at("2020-01-01T00:00:00.500Z"))->recorded == "missing");
  CHECK_FALSE(held.book.reading_origin(kStation, at("2020-01-01T05:00Z")));
  CHECK_FALSE(held.book.reading_origin(kStation, at("2021-01-01T05:00Z")));
}

TEST_CASE("a repeated reading is skipped and counted, the others are added around it") {
  Held held;
  held.take(of({{"02:00", 20}, {"03:00", 30}}));
  const std::int64_t version = held.book.data_version(kStation);
  const StageSeries more = of({{"01:00", 10}, {"02:00", 20}, {"04:00", 40}, {"05:00", 50}});
  CHECK(held.overlaps(more).empty());
  const StageTaken taken = held.take(more);
  CHECK(taken.added == 3);
  CHECK(taken.repeated == 1);
  CHECK(taken.pieces == 2);  // before and after what is held: a piece decides all that it spans
  CHECK(text_of(held.january()) == "01:00=10 02:00=20 03:00=30 04:00=40 05:00=50");
  CHECK(held.book.data_version(kStation) == version + 1);
  const StageTaken again = held.take(more);
  CHECK(again.added == 0);
  CHECK(again.repeated == 4);
  CHECK(again.pieces == 0);
  CHECK(held.book.data_version(kStation) == version + 1);
}

TEST_CASE("readings between held ones never hide them") {
  Held held;
  held.take(of({{"02:00", 20}, {"04:00", 40}, {"06:00", 60}}));
  const StageTaken taken = held.take(of({{"01:00", 10}, {"03:00", 30}, {"03:30", 35}, {"07:00", 70}}));
  CHECK(taken.added == 4);
  CHECK(taken.pieces == 3);
  CHECK(text_of(held.january()) == "01:00=10 02:00=20 03:00=30 03:30=35 04:00=40 06:00=60 07:00=70");
}

TEST_CASE("a contradiction is listed, and refused without a correction") {
  Held held;
  held.take(of({{"02:00", 20}, {"03:00", 30}, {"04:00", kMissing}}));
  const StageSeries other = of({{"02:00", 21}, {"03:00", 30}, {"04:00", 40}, {"05:00", 50}});
  const auto found = held.overlaps(other);
  REQUIRE(found.size() == 2);
  CHECK(found[0].line == 2);
  CHECK(found[0].time == at("2020-01-01T02:00Z"));
  CHECK(found[0].held == 2'000'000);
  CHECK(found[0].given == 2'100'000);
  CHECK(found[1].held == kMissing);
  CHECK(held.overlaps(other, 1).size() == 1);
  CHECK_THROWS_WITH(
      held.take(other),
      "a reading of TAR-1 at 2020-01-01T02:00:00Z contradicts the one that is held; a correction needs "
      "--correct --reason");
  CHECK(text_of(held.january()) == "02:00=20 03:00=30 04:00=none");
}

TEST_CASE("the same height in other decimals or units repeats") {
  Held held;
  held.take(of({{"02:00", 3048}}));
  StageSeries feet{kStation, StageUnit::foot, 1, {{at("2020-01-01T02:00Z"), 100, Quality::unchecked, 2}}};
  CHECK(held.overlaps(feet).empty());
  CHECK(held.take(feet).repeated == 1);
}

TEST_CASE("another quality is a contradiction where the file states one") {
  Held held;
  StageSeries good = of({{"02:00", 20}});
  good.readings[0].quality = Quality::good;
  held.take(good);
  CHECK(held.take(of({{"02:00", 20}})).repeated == 1);
  StageSeries poor = good;
  poor.readings[0].quality = Quality::poor;
  const auto found = held.overlaps(poor);
  REQUIRE(found.size() == 1);
  CHECK(found[0].held == found[0].given);
  CHECK(found[0].held_quality == Quality::good);
  CHECK(found[0].given_quality == Quality::poor);
  CHECK_THROWS_AS(held.take(poor), StoreError);
  const StageTaken taken = held.take(poor, true);
  CHECK(taken.added == 1);
  CHECK(text_of(held.january()) == "02:00=20(poor)");
}

TEST_CASE("a correction replaces what it spans, and only that") {
  Held held;
  held.take(of({{"01:00", 10}, {"02:00", 20}, {"03:00", 30}, {"04:00", 40}, {"05:00", 50}}));
  const std::int64_t before = held.book.newest_act();
  const StageTaken taken = held.take(of({{"02:00", 21}, {"04:00", kMissing}}), true);
  CHECK(taken.added == 2);
  CHECK(taken.pieces == 1);
  CHECK(text_of(held.january()) == "01:00=10 02:00=21 04:00=none 05:00=50");
  CHECK(text_of(held.january({before})) == "01:00=10 02:00=20 03:00=30 04:00=40 05:00=50");
  CHECK_FALSE(held.book.reading_origin(kStation, at("2020-01-01T03:00Z")));
  CHECK(held.book.reading_origin(kStation, at("2020-01-01T03:00Z"), {before}));
  // What was taken out may come in again, without a correction.
  CHECK(held.take(of({{"03:00", 33}})).added == 1);
  CHECK(text_of(held.january()) == "01:00=10 02:00=21 03:00=33 04:00=none 05:00=50");
}

TEST_CASE("a correction that says what is held stores nothing") {
  Held held;
  held.take(of({{"01:00", 10}, {"02:00", 20}}));
  const StageTaken taken = held.take(of({{"01:00", 10}, {"02:00", 20}}), true);
  CHECK(taken.pieces == 0);
  CHECK(taken.repeated == 2);
  CHECK(taken.added == 0);
  CHECK(held.book.data_version(kStation) == 2);
}

TEST_CASE("a correction over months empties those without readings") {
  Held held;
  held.take(series("2020-01-30T00:00Z", 24 * 40, 1000));
  StageSeries sparse{kStation, StageUnit::metre, 3, {}};
  sparse.readings = {{at("2020-01-31T12:00Z"), 5, Quality::unchecked, 2},
                     {at("2020-03-01T06:00Z"), 6, Quality::unchecked, 3}};
  const StageTaken taken = held.take(sparse, true);
  CHECK(taken.added == 2);
  CHECK(taken.pieces == 3);
  CHECK(held.january().time_ms.back() == to_ms(at("2020-01-31T12:00Z")));
  CHECK(held.january().time_ms.size() == 24 + 12 + 1);
  CHECK(held.book.stage_block(kStation, utc_month_of(at("2020-02-01T00:00Z"))).time_ms.empty());
  const StageBlock march = held.book.stage_block(kStation, utc_month_of(at("2020-03-01T00:00Z")));
  CHECK(march.time_ms.front() == to_ms(at("2020-03-01T06:00Z")));
  CHECK(march.ticks.front() == 600'000);
  CHECK(held.book.stage_span(kStation)->first == at("2020-01-30T00:00Z"));
  CHECK(held.book.verify().empty());
}

TEST_CASE("a series without readings stores nothing") {
  Held held;
  const StageSeries none{kStation, StageUnit::metre, 3, {}};
  CHECK(held.take(none).pieces == 0);
  CHECK(held.take(none, true).pieces == 0);
  CHECK(held.overlaps(none).empty());
}

TEST_CASE("the data version is the last act that changed stage, correction or gauge zero") {
  Held held;
  CHECK(held.book.data_version(kStation) == 0);
  add_ground(held.book);  // gauge zero and correction
  CHECK(held.book.data_version(kStation) == 2);
  held.take(of({{"02:00", 20}}));
  CHECK(held.book.data_version(kStation) == 3);
  CHECK(held.book.data_version("another") == 0);
  const auto add = [&](const auto& record, bool withdrawn = false) {
    auto writer = held.book.begin(head("record"));
    const auto file = writer.add_file("r.csv", 1, std::string(64, '0'), "gauging");
    writer.add(record, {file, 2}, true, withdrawn);
    return writer.commit().number;
  };
  add(gauging("G9", "2020-01-01T00:00Z", 1, 1));
  add(station());
  CHECK(held.book.data_version(kStation) == 3);
  const std::int64_t zero =
      add(GaugeZeroRow{kStation, at("2010-01-01T00:00Z"), GaugeZero::from_metres(1), ""});
  CHECK(held.book.data_version(kStation) == zero);
  const StageCorrection correction{kStation, at("2010-01-01T00:00Z"), at("2010-01-02T00:00Z"), {}, {}, ""};
  const std::int64_t first = add(correction);
  CHECK(held.book.data_version(kStation) == first);
  const std::int64_t withdrawn = add(correction, true);
  CHECK(held.book.data_version(kStation) == withdrawn);
  CHECK(held.book.data_version(kStation, {first}) == first);
  CHECK(held.book.data_version(kStation, {first - 1}) == zero);
  CHECK(held.book.data_version(kStation, {2}) == 2);
}

TEST_CASE("a plain client reads the readings in force one a row") {
  Held held;
  held.take(of({{"01:00", 10}, {"02:00", 20}, {"03:00", 30}}), false, "first.csv");
  StageSeries change = of({{"02:00", 21}, {"03:17", kMissing}});
  change.readings[0].quality = Quality::estimate;
  held.take(change, true, "second.csv");
  StageSeries feet{"FT-1", StageUnit::foot, 2, {{at("2020-01-01T00:00Z"), 250, Quality::unchecked, 2}}};
  held.take(feet);
  auto db = plain::open(held.folder.path());
  CHECK(plain::column(
            db,
            "SELECT s.time || ' ' || coalesce(round(s.stage_m, 6), 'none') || ' ' || s.quality || ' ' || "
            "f.name || ':' || s.line FROM stage s JOIN file f ON f.id = s.file ORDER BY s.station DESC, "
            "s.time_ms") == std::vector<std::string>{"2020-01-01T01:00:00.000Z 0.01 unchecked first.csv:2",
                                                     "2020-01-01T02:00:00.000Z 0.021 estimate second.csv:2",
                                                     "2020-01-01T03:17:00.000Z none unchecked second.csv:3",
                                                     "2020-01-01T00:00:00.000Z 0.762 unchecked stage.csv:2"});
  CHECK(plain::one(db, "SELECT count(*) FROM stage_recorded WHERE station = 'TAR-1'") == "5");
}
