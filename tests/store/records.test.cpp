// Field records: every field comes back as it went in, versions, withdrawals, and what was known when.

#include <catch2/catch.hpp>
#include <limits>

#include "store/full_book.hpp"

using namespace full_book;
using store::Book;
using store::StoreError;

namespace {

struct Held {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));

  template <class Record>
  std::int64_t add(const Record& record, bool correct = false, bool withdrawn = false,
                   std::int64_t line = 7) {
    auto writer = book.begin(head("record"));
    const auto file = writer.add_file("records.csv", 1, std::string(64, 'a'), "gauging");
    if constexpr (std::is_same_v<Record, Survey>) {
      writer.add(record, {file, line}, std::vector<std::int64_t>(record.points.size(), line), correct,
                 withdrawn);
    } else {
      writer.add(record, {file, line}, correct, withdrawn);
    }
    return writer.commit().number;
  }
  template <class Record>
  std::string refused(const Record& record, bool correct = false) {
    const std::int64_t before = book.newest_act();
    try {
      add(record, correct);
    } catch (const StoreError& error) {
      CHECK(error.kind() == StoreError::Kind::refused);
      CHECK(book.newest_act() == before);
      return error.what();
    }
    return "stored";
  }
};

/// The smallest records: what is optional is empty.
Gauging bare_gauging() {
  Gauging made;
  made.station = kStation;
  made.id = "bare";
  made.start = at("2018-01-01T00:00Z");
  return made;
}

}  // namespace

TEST_CASE("every field of every record comes back as it went in") {
  Held held;
  held.add(station());
  Station bare;
  bare.id = "B-2";
  held.add(bare);
  CHECK(held.book.station(kStation)->value == station());
  CHECK(held.book.station("B-2")->value == bare);
  CHECK(held.book.stations().size() == 2);

  const GaugeZeroRow zero{kStation, at("2019-01-01T00:00:00.123Z"), GaugeZero::from_ticks(-123'456'789'012),
                          "x"};
  held.add(zero);
  CHECK(held.book.gauge_zeros(kStation).at(0).value == zero);

  const Survey made = survey("S1", "2019-01-15T10:00Z");
  held.add(made);
  CHECK(held.book.survey(kStation, "S1")->value == made);
  CHECK(held.book.surveys(kStation).at(0).value == made);

  const Gauging full = gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1);
  held.add(full);
  held.add(bare_gauging());
  CHECK(held.book.gauging(kStation, "G1")->value == full);
  CHECK(held.book.gauging(kStation, "bare")->value == bare_gauging());

  for (const auto kind : {ControlKind::section, ControlKind::channel, ControlKind::overbank}) {
    held.add(reach(kind));
  }
  ReachRow bare_reach;
  bare_reach.station = kStation;
  bare_reach.law = FlowLaw::chezy;
  bare_reach.chezy_c = 1.0 / 3;
  held.add(bare_reach);
  const auto rows = held.book.reach_rows(kStation);
  REQUIRE(rows.size() == 4);
  CHECK(rows[0].stored.value == bare_reach);  // 1970
  CHECK(rows[1].stored.value == reach(ControlKind::section));
  CHECK(rows[2].stored.value == reach(ControlKind::channel));
  CHECK(rows[3].stored.value == reach(ControlKind::overbank));

  const StageCorrection correction{kStation,
                                   at("2020-01-30T00:00Z"),
                                   at("2020-01-31T00:00Z"),
                                   HeightChange::from_ticks(1),
                                   HeightChange::from_ticks(-2),
                                   "drift"};
  held.add(correction);
  CHECK(held.book.stage_corrections(kStation).at(0).value == correction);
}

TEST_CASE("a stored record names its version, act, file and line") {
  Held held;
  const std::int64_t act = held.add(gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1), false, false, 42);
  const auto stored = held.book.gauging(kStation, "G1");
  REQUIRE(stored);
  CHECK(stored->version == 1);
  CHECK(stored->act == act);
  CHECK_FALSE(stored->withdrawn);
  CHECK(stored->source.line == 42);
  CHECK(held.book.file(stored->source.file)->name == "records.csv");
}

TEST_CASE("a held key needs a correction, which writes the next version") {
  Held held;
  const Gauging first = gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1);
  const Gauging second = gauging("G1", "2019-03-02T10:00Z", 2.3, 5);
  const std::int64_t early = held.add(first);
  CHECK(held.refused(second) ==
        "gauging G1 of TAR-1 is held already; take it in with --correct --reason to write a new version");
  const std::int64_t late = held.add(second, true);
  CHECK(held.book.gauging(kStation, "G1")->value == second);
  CHECK(held.book.gauging(kStation, "G1")->version == 2);
  CHECK(held.book.gauging(kStation, "G1", {early})->value == first);
  CHECK(held.book.gauging(kStation, "G1", {late - 1})->version == 1);
  CHECK_FALSE(held.book.gauging(kStation, "G1", {early - 1}));
  CHECK(held.book.gaugings(kStation).size() == 1);
  CHECK(held.book.gauging_version(kStation, "G1", 1)->value == first);
  CHECK(held.book.gauging_version(kStation, "G1", 2)->value == second);
  CHECK_FALSE(held.book.gauging_version(kStation, "G1", 3));
}

TEST_CASE("a correction of what is not held is its first version") {
  Held held;
  held.add(gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1), true);
  CHECK(held.book.gauging(kStation, "G1")->version == 1);
}

TEST_CASE("a withdrawn record is hidden from its act on, and comes back by correction") {
  Held held;
  const Survey made = survey("S1", "2019-01-15T10:00Z");
  const std::int64_t first = held.add(made);
  const std::int64_t withdrawn = held.add(made, true, true);
  CHECK_FALSE(held.book.survey(kStation, "S1"));
  CHECK(held.book.surveys(kStation).empty());
  CHECK(held.book.survey(kStation, "S1", {first})->value == made);
  CHECK(held.book.survey_version(kStation, "S1", 2)->withdrawn);
  CHECK(held.book.survey_version(kStation, "S1", 1)->value == made);
  CHECK(held.refused(made).find("is held already") != std::string::npos);
  held.add(made, true);
  CHECK(held.book.survey(kStation, "S1")->version == 3);
  CHECK_FALSE(held.book.survey(kStation, "S1", {withdrawn}));
}

TEST_CASE("a reach row keeps its number through its versions") {
  Held held;
  held.add(reach(ControlKind::channel));
  held.add(reach(ControlKind::channel, "2020-01-01T00:00Z"));
  ReachRow rougher = reach(ControlKind::channel);
  rougher.roughness_n = 0.04;
  const std::int64_t act = held.add(rougher, true);
  const auto rows = held.book.reach_rows(kStation);
  REQUIRE(rows.size() == 2);
  CHECK(rows[0].row == 1);
  CHECK(rows[0].stored.version == 2);
  CHECK(rows[0].stored.value == rougher);
  CHECK(rows[1].row == 2);
  CHECK(rows[1].stored.version == 1);
  CHECK(held.book.reach_rows(kStation, {act - 1})[0].stored.value == reach(ControlKind::channel));
  CHECK(held.book.reach_row(kStation, 1, 1)->stored.value == reach(ControlKind::channel));
  CHECK(held.book.reach_row(kStation, 1, 2)->stored.value == rougher);
  CHECK_FALSE(held.book.reach_row(kStation, 1, 3));
  CHECK_FALSE(held.book.reach_row("another", 1, 1));
}

TEST_CASE("records come in their order, and only those of their station") {
  Held held;
  held.add(gauging("late", "2019-05-01T10:00Z", 1, 1));
  held.add(gauging("early", "2019-03-01T10:00Z", 1, 1));
  Gauging long_one = gauging("long", "2019-02-01T00:00Z", 1, 1);
  long_one.end = at("2019-05-01T00:00Z");  // its middle lies between the two
  held.add(long_one);
  Gauging foreign = gauging("foreign", "2019-03-01T10:00Z", 1, 1);
  foreign.station = "OTHER";
  held.add(foreign);
  std::vector<std::string> ids;
  for (const auto& stored : held.book.gaugings(kStation)) ids.push_back(stored.value.id);
  CHECK(ids == std::vector<std::string>{"early", "long", "late"});
  CHECK(held.book.gaugings("OTHER").size() == 1);

  held.add(survey("S2", "2020-01-01T00:00Z"));
  held.add(survey("S1", "2019-01-01T00:00Z"));
  CHECK(held.book.surveys(kStation)[0].value.id == "S1");
  held.add(GaugeZeroRow{kStation, at("2020-01-01T00:00Z"), GaugeZero::from_metres(2), ""});
  held.add(GaugeZeroRow{kStation, at("2019-01-01T00:00Z"), GaugeZero::from_metres(1), ""});
  CHECK(held.book.gauge_zeros(kStation)[0].value.zero == GaugeZero::from_metres(1));
}

TEST_CASE("a figure that is none is refused by the name of its column") {
  Held held;
  const double nan = std::numeric_limits<double>::quiet_NaN(), inf = std::numeric_limits<double>::infinity();
  Gauging bad = gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1);
  bad.area_m2 = nan;
  CHECK(held.refused(bad) == "gauging.area_m2 is nan, which is no figure; nothing was stored");
  bad = gauging("G1", "2019-03-01T10:00Z", 2.2, inf);
  CHECK(held.refused(bad) == "gauging.discharge_m3s is inf, which is no figure; nothing was stored");
  Survey survey_bad = survey("S1", "2019-01-15T10:00Z");
  survey_bad.points[1].distance_m = -inf;
  CHECK(held.refused(survey_bad) ==
        "survey_point.distance_m is -inf, which is no figure; nothing was stored");
  Station station_bad = station();
  station_bad.latitude = nan;
  CHECK(held.refused(station_bad) == "station.latitude is nan, which is no figure; nothing was stored");
  ReachRow reach_bad = reach(ControlKind::channel);
  reach_bad.slope = inf;
  CHECK(held.refused(reach_bad) == "reach.slope is inf, which is no figure; nothing was stored");
}

TEST_CASE("a text that other tools would read as another is refused by the name of its column") {
  Held held;
  Gauging bad = gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1);
  bad.remark = "caf\xe9";
  CHECK(held.refused(bad) ==
        "gauging.remark is a text that is not UTF-8, or holds a NUL; nothing was stored");
  bad.remark = std::string("a\0b", 3);
  CHECK(held.refused(bad) ==
        "gauging.remark is a text that is not UTF-8, or holds a NUL; nothing was stored");
}

TEST_CASE("a record of a file that is not in the book is refused at the end of its act") {
  Held held;
  auto writer = held.book.begin(head("no file"));
  writer.add(station(), {99, 1});
  std::string said;
  try {
    writer.commit();
  } catch (const StoreError& error) {
    said = error.what();
  }
  CHECK(said == "a row of station names a row of file that the book does not hold; nothing was stored");
}
