// Editions, replays and publications as stored.

#include <catch2/catch.hpp>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::StoreError;

namespace {

struct Held {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  Held() { fill(book); }

  Edition add(std::vector<Period> periods, std::optional<int> parent = {}) {
    Edition made;
    made.station = kStation;
    made.parent = parent;
    made.periods = std::move(periods);
    auto writer = book.begin(head("edition"));
    Edition stored = writer.add_edition(made);
    writer.commit();
    return stored;
  }
  std::string refused(std::vector<Period> periods) {
    try {
      add(std::move(periods));
    } catch (const StoreError& error) {
      CHECK(error.kind() == StoreError::Kind::refused);
      return error.what();
    }
    return "stored";
  }
};

Period period(const std::string& from, const std::string& until, std::optional<int> curve = 1) {
  Period made;
  made.from = at(from);
  if (!until.empty()) made.until = at(until);
  made.curve = curve;
  return made;
}

bool same(const store::PublishedMonth& a, const store::PublishedMonth& b) {
  const auto& [month, time, value, u95, flags, quality, curve] = a;
  return month == b.month && time == b.time_ms && value == b.value && u95 == b.u95_tenth_pct &&
         flags == b.flags && quality == b.quality && curve == b.curve;
}

bool same(const store::PublishedDay& a, const store::PublishedDay& b) {
  const auto& [day, mean, u95, flags, quality, share, curves] = a;
  return day == b.day && mean == b.mean && u95 == b.u95_tenth_pct && flags == b.flags &&
         quality == b.quality && share == b.share && curves == b.curves;
}

}  // namespace

TEST_CASE("the periods of an edition come back as they went in") {
  Held held;
  std::vector<Period> periods = {period("2019-02-01T00:00Z", "2019-03-01T00:00:00.001Z")};
  periods[0].blend = Millis(12'345);
  for (const NoCurve reason :
       {NoCurve::closed, NoCurve::ice, NoCurve::backwater, NoCurve::works, NoCurve::other}) {
    const Instant from = *periods.back().until;
    periods.push_back({from, from + Millis(1), {}, reason, Millis(0)});
  }
  periods.push_back(period("2020-01-01T00:00Z", "", 2));
  const Edition stored = held.add(periods, 1);
  CHECK(stored.number == 2);
  CHECK(stored.act == held.book.newest_act());
  const auto read = held.book.edition(kStation, 2);
  REQUIRE(read);
  CHECK(read->periods == periods);
  CHECK(read->parent == 1);
  CHECK(read->act == stored.act);
  CHECK(read->station == kStation);
  CHECK_FALSE(held.book.edition(kStation, 1)->parent);
  CHECK_FALSE(held.book.edition(kStation, 3));
}

TEST_CASE("editions are numbered by station and known from their act on") {
  Held held;
  const std::int64_t before = held.book.newest_act();
  held.add({period("2019-01-01T00:00Z", "")});
  CHECK(held.book.newest_edition(kStation)->number == 2);
  CHECK(held.book.newest_edition(kStation, {before})->number == 1);
  CHECK(held.book.editions(kStation).size() == 2);
  CHECK(held.book.editions(kStation, {before}).size() == 1);
  CHECK_FALSE(held.book.newest_edition(kStation, {2}));
  CHECK_FALSE(held.book.newest_edition("another"));
}

TEST_CASE("periods that end before they begin or overlap are refused") {
  Held held;
  CHECK(held.refused({period("2019-01-01T00:00Z", "2019-01-01T00:00Z")}) ==
        "period 1 of the edition, from 2019-01-01T00:00:00Z, ends before it begins; nothing was stored");
  CHECK(held.refused({period("2019-01-01T00:00Z", "2019-03-01T00:00Z"), period("2019-02-28T00:00Z", "")}) ==
        "period 1 of the edition, from 2019-01-01T00:00:00Z, reaches into the next; nothing was stored");
  CHECK(held.refused({period("2019-01-01T00:00Z", ""), period("2019-02-28T00:00Z", "")}) ==
        "period 1 of the edition, from 2019-01-01T00:00:00Z, reaches into the next; nothing was stored");
  CHECK(held.refused({period("2019-01-01T00:00Z", "", 9)}) ==
        "a row of period names a row of curve that the book does not hold; nothing was stored");
  CHECK(held.add({}).periods.empty());
}

TEST_CASE("a replay comes back as it went in") {
  Held held;
  auto writer = held.book.begin(head("replay"));
  store::ReplayRecord made;
  made.station = kStation;
  made.edition = 1;
  made.data_version = 3;
  made.method = 1;
  made.from = at("2020-01-01T00:00Z");
  made.until = at("2020-03-01T00:00Z");
  made.months = {{utc_month_of(made.from), 2976, std::string(64, 'b')}, {{24242}, 0, std::string(64, 'c')}};
  CHECK(writer.add_replay(made).number == 2);
  const std::int64_t act = writer.commit().number;
  const auto read = held.book.replay(kStation, 2);
  REQUIRE(read);
  CHECK(read->act == act);
  CHECK(read->edition == 1);
  CHECK(read->data_version == 3);
  CHECK(read->method == 1);
  CHECK(read->from == made.from);
  CHECK(read->until == made.until);
  REQUIRE(read->months.size() == 2);
  CHECK(read->months[0].month == made.months[0].month);
  CHECK(read->months[0].values == 2976);
  CHECK(read->months[1].sha256 == std::string(64, 'c'));
  CHECK(held.book.replays(kStation).size() == 2);
  CHECK(held.book.replays(kStation, {act - 1}).size() == 1);
  CHECK_FALSE(held.book.replay(kStation, 3));
}

TEST_CASE("a publication comes back as it went in") {
  Held held;
  const store::Publication made = publication(1);
  const auto read = held.book.publication(kStation, 1);
  REQUIRE(read);
  CHECK(read->replay == 1);
  CHECK(read->from == made.from);
  CHECK(read->until == made.until);
  CHECK(read->decimals == 3);
  CHECK(read->title == "winter 2020");
  CHECK(read->note == "after the flood");
  REQUIRE(read->months.size() == 2);
  CHECK(same(read->months[0], made.months[0]));
  CHECK(same(read->months[1], made.months[1]));
  REQUIRE(read->days.size() == 2);
  CHECK(same(read->days[0], made.days[0]));
  CHECK(same(read->days[1], made.days[1]));
  const auto heads = held.book.publications(kStation);
  REQUIRE(heads.size() == 1);
  CHECK(heads[0].months.empty());
  CHECK(heads[0].days.empty());
  CHECK(heads[0].sha256 == read->sha256);
  CHECK(held.book.publications(kStation, {read->act - 1}).empty());
  CHECK_FALSE(held.book.publication(kStation, 2));
}

TEST_CASE("a publication of empty months and no days comes back as well") {
  Held held;
  store::Publication made = publication(1);
  made.months = {{UtcMonth{24240}, {}, {}, {}, {}, {}, {}}};
  made.days.clear();
  auto writer = held.book.begin(head("empty"));
  CHECK(writer.add_publication(made).number == 2);
  writer.commit();
  const auto read = held.book.publication(kStation, 2);
  REQUIRE(read->months.size() == 1);
  CHECK(same(read->months[0], made.months[0]));
  CHECK(read->days.empty());
}

TEST_CASE("a publication's digest is over its months and days, and over nothing else") {
  Held held;
  const std::string digest = held.book.publication(kStation, 1)->sha256;
  const auto digest_of = [&](const store::Publication& made) {
    auto writer = held.book.begin(head("again"));
    const std::string sha256 = writer.add_publication(made).sha256;
    writer.commit();
    return sha256;
  };
  store::Publication other = publication(1);
  other.title = "another title";
  CHECK(digest_of(other) == digest);
  other.days[0].mean = 1235;
  CHECK(digest_of(other) != digest);
  other = publication(1);
  other.months[1].value[2] = 7;
  CHECK(digest_of(other) != digest);
  other = publication(1);
  other.months[0].quality[1] = Quality::suspect;
  CHECK(digest_of(other) != digest);
}

TEST_CASE("a plain client reads published figures one a row") {
  Held held;
  auto db = plain::open(held.folder.path());
  CHECK(plain::column(
            db,
            "SELECT time || ' ' || coalesce(discharge_m3s, 'none') || ' ' || u95_pct || ' ' || quality "
            "|| ' ' || flags || ' ' || curve FROM publication_value WHERE station = 'TAR-1'") ==
        std::vector<std::string>{
            "2020-01-31T07:00:00.000Z 1.0 10.0 good 1 1", "2020-01-31T08:00:00.000Z 1.001 10.1 good 1 1",
            "2020-01-31T09:00:00.000Z 1.002 10.2 good 544 1",
            "2020-01-31T10:00:00.000Z none 0.0 missing 544 1",
            "2020-01-31T11:00:00.000Z 1.004 10.4 missing 544 0",
            "2020-01-31T12:00:00.000Z 1.005 10.5 missing 544 0", "2020-02-01T07:00:00.000Z 1.0 10.0 good 1 1",
            "2020-02-01T08:00:00.000Z 1.001 10.1 good 1 1", "2020-02-01T09:00:00.000Z 1.002 10.2 good 544 1",
            "2020-02-01T10:00:00.000Z none 0.0 missing 544 1",
            "2020-02-01T11:00:00.000Z 1.004 10.4 missing 544 0",
            "2020-02-01T12:00:00.001Z 1.005 10.5 missing 544 0"});
  CHECK(
      plain::column(
          db, "SELECT day || ' ' || coalesce(discharge_m3s, 'none') || ' ' || quality FROM published_day") ==
      std::vector<std::string>{"2020-01-31 1.234 estimate", "2020-02-01 none missing"});
}

TEST_CASE("a plain client reads newest records and the periods in force one a row") {
  Held held;
  auto db = plain::open(held.folder.path());
  CHECK(plain::one(db, "SELECT valid_from || ' ' || gauge_zero_m FROM gauge_zero_now") ==
        "2019-01-01T00:00:00.000Z 99.123");
  CHECK(plain::one(
            db, "SELECT start || ' ' || stage_m || ' ' || discharge_m3s FROM gauging_now WHERE id = 'G1'") ==
        "2019-03-01T10:00:00.000Z 2.2 4.1");
  CHECK(plain::one(db, "SELECT count(*) FROM survey_point_now WHERE survey = 'S1'") == "3");
  CHECK(plain::one(db, "SELECT \"from\" || ' ' || add_at_until_m FROM stage_correction_now") ==
        "2020-01-30T00:00:00.000Z -0.02");
  CHECK(plain::one(db, "SELECT group_concat(coalesce(curve, no_curve), ' ') FROM period_now") == "1 ice 2");
  CHECK(plain::one(db, "SELECT name FROM station_now") == "Tarn at Old Mill");
  CHECK(plain::one(db, "SELECT count(*) FROM reach_now") == "3");
  auto writer = held.book.begin(head("withdrawn"));
  const auto file = writer.add_file("w.csv", 1, std::string(64, '0'), "gauging");
  writer.add(gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1), {file, 2}, true, true);
  writer.commit();
  CHECK(plain::one(db, "SELECT count(*) FROM gauging_now WHERE id = 'G1'") == "0");
}
