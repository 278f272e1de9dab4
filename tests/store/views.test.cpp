// The plain views `stage` and `stage_recorded` say what the program itself reads: over random takes,
// corrections, units, gaps and a merged month.

#include <catch2/catch.hpp>

#include <cmath>
#include <map>
#include <random>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::kMissing;
using store::StageBlock;
using store::StageSeries;
using store::StageUnit;

namespace {

/// A reading as text: time, height in ticks, quality, file, line, act of the piece that it stands in.
std::string said(std::int64_t time_ms, std::int64_t ticks, std::string_view quality, std::int64_t file,
                 std::int64_t line, std::int64_t piece) {
  return std::to_string(time_ms) + " " + (ticks == kMissing ? "none" : std::to_string(ticks)) + " " +
         std::string(quality) + " " + std::to_string(file) + ":" + std::to_string(line) + " " +
         std::to_string(piece);
}

std::vector<std::string> by_program(const Book& book, const std::string& station) {
  std::vector<std::string> all;
  for (const UtcMonth month : book.stage_months(station)) {
    const StageBlock block = book.stage_block(station, month);
    for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
      const auto origin = book.reading_origin(station, from_ms(block.time_ms[i]));
      REQUIRE(origin);
      const std::int64_t piece = block.pieces.at(static_cast<std::size_t>(block.piece[i]));
      CHECK(origin->piece == piece);
      all.push_back(
          said(block.time_ms[i], block.ticks[i], word(block.quality[i]), origin->file, origin->line, piece));
    }
  }
  return all;
}

std::vector<std::string> by_view(SQLite::Database& db, const std::string& station) {
  SQLite::Statement query(
      db,
      "SELECT time_ms, stage_m, quality, file, line, piece FROM stage WHERE station = ? ORDER BY time_ms");
  query.bind(1, station);
  std::vector<std::string> all;
  while (query.executeStep()) {
    const auto height = query.getColumn(1);
    const std::int64_t ticks = height.isNull() ? kMissing : std::llround(height.getDouble() * 1e8);
    all.push_back(said(query.getColumn(0).getInt64(), ticks, query.getColumn(2).getString(),
                       query.getColumn(3).getInt64(), query.getColumn(4).getInt64(),
                       query.getColumn(5).getInt64()));
  }
  return all;
}

void check_equal(const std::vector<std::string>& view, const std::vector<std::string>& program) {
  REQUIRE(view.size() == program.size());
  for (std::size_t i = 0; i < view.size(); ++i) {
    if (view[i] != program[i]) CHECK(view[i] == program[i]);
  }
  CHECK(view == program);
}

/// Random readings over two months; what is held already is left out unless it is corrected.
StageSeries random_series(std::mt19937_64& random, const Book& book, bool correct) {
  const auto below = [&](std::int64_t limit) { return std::int64_t(random() % std::uint64_t(limit)); };
  StageSeries made{kStation, below(3) == 0 ? StageUnit::foot : StageUnit::metre, int(below(5)), {}};
  Instant time = at("2020-01-25T00:00Z") + Millis(below(14 * 24) * 3'600'000);
  const std::int64_t step = below(2) == 0 ? 3'600'000 : 1'000;
  std::int64_t line = 1 + below(5);
  for (std::int64_t i = below(30); i >= 0; --i) {
    time += Millis(step * (below(8) == 0 ? 1 + below(50) : 1));
    line += below(6) == 0 ? 1 + below(4) : 1;
    if (!correct && book.reading_origin(kStation, time)) continue;
    const std::int64_t value = below(10) == 0 ? kMissing : below(5000) - 100;
    made.readings.push_back({time, value, static_cast<Quality>(below(5)), line});
  }
  return made;
}

}  // namespace

TEST_CASE("the view of the readings in force is what the program reads, whatever was taken") {
  for (const unsigned seed : {11u, 12u, 13u}) {
    CAPTURE(seed);
    const Folder folder;
    Book book = Book::create(folder.path(), head("new"));
    std::mt19937_64 random(seed);
    for (int i = 0; i < 60; ++i) {
      const bool correct = random() % 4 == 0;
      take(book, random_series(random, book, correct), correct);
    }
    auto db = plain::open(folder.path());
    check_equal(by_view(db, kStation), by_program(book, kStation));
    // Months that have ended are merged; the views must not count a reading twice then.
    take(book, series("2020-04-01T00:00Z", 2, 5));
    REQUIRE(plain::one(db, "SELECT count(*) > 0 FROM stage_piece WHERE merged = 1") == "1");
    check_equal(by_view(db, kStation), by_program(book, kStation));
    CHECK(by_view(db, "another").empty());
  }
}

TEST_CASE("the view of all that was recorded holds every reading of every piece, as recorded") {
  const Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  StageSeries feet{kStation, StageUnit::foot, 2, {}};
  feet.readings = {{at("2020-01-01T00:00Z"), 312, Quality::good, 2},
                   {at("2020-01-01T00:15Z"), kMissing, Quality::missing, 3},
                   {at("2020-01-01T00:31Z"), -5, Quality::good, 7}};
  take(book, feet);
  take(book, series("2020-01-01T00:15Z", 2, 95, 15), true);
  auto db = plain::open(folder.path());
  CHECK(plain::column(db,
                      "SELECT piece || ' ' || act || ' ' || month || ' ' || time_ms || ' ' || "
                      "coalesce(stage_value, 'none') || ' ' || decimals || ' ' || unit || ' ' || quality || "
                      "' ' || file || ':' || line FROM stage_recorded ORDER BY piece, time_ms") ==
        std::vector<std::string>{
            "1 2 24240 1577836800000 312 2 ft good 1:2", "1 2 24240 1577837700000 none 2 ft missing 1:3",
            "1 2 24240 1577838660000 -5 2 ft good 1:7", "2 3 24240 1577837700000 95 3 m unchecked 2:2",
            "2 3 24240 1577838600000 96 3 m unchecked 2:3"});
  // 00:31 lies after the correction's last reading, so it stays.
  check_equal(by_view(db, kStation), by_program(book, kStation));
  CHECK(by_view(db, kStation).size() == 4);
}
