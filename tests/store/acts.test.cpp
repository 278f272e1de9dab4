// Acts: number, time, who and why, digests, and the chain that links them, recomputed here by another way.

#include <catch2/catch.hpp>
#include <algorithm>
#include <cstring>
#include <functional>
#include <nlohmann/json.hpp>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::StoreError;

namespace {

std::string refusal(const std::function<void()>& work) {
  try {
    work();
  } catch (const StoreError& error) {
    CHECK(error.kind() == StoreError::Kind::refused);
    return error.what();
  }
  return "not refused";
}

}  // namespace

TEST_CASE("the first act stores the settings") {
  Folder folder;
  store::Settings settings;
  settings.published_digits = 4;
  settings.least_share_of_day = 0.1 + 0.2;
  Book book = Book::create(folder.path(), {"A", "", "why", "new"}, settings);
  REQUIRE(book.newest_act() == 1);
  const Act act = book.act(1);
  CHECK(act.who == "A");
  CHECK(act.reason == "why");
  CHECK(act.command == "new");
  CHECK(act.program == store::program_version());
  CHECK(act.method == store::kMethodVersion);
  REQUIRE(act.tables.size() == 1);
  CHECK(act.tables[0].table == "setting");
  CHECK(act.tables[0].rows == 6);
  const store::Settings held = book.settings();
  CHECK(held.published_digits == 4);
  CHECK(held.least_share_of_day == 0.1 + 0.2);
  CHECK(held.longest_gap_minutes == 360);
}

TEST_CASE("settings count from their act on") {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  store::Settings settings;
  settings.longest_gap_minutes = 90;
  auto writer = book.begin(head("gaps"));
  writer.add_settings(settings);
  writer.commit();
  CHECK(book.settings({1}).longest_gap_minutes == 360);
  CHECK(book.settings({2}).longest_gap_minutes == 90);
  CHECK(book.settings().longest_gap_minutes == 90);
}

TEST_CASE("an act without a name is refused, and nothing is stored") {
  Folder folder;
  CHECK(refusal([&] {
          (void)Book::create(folder.path(), {"  ", "", "", ""});
        }) == "an act needs the name of who does it");
  CHECK_FALSE(std::filesystem::exists(folder.path()));
  Book book = Book::create(folder.path(), head("new"));
  CHECK(refusal([&] { (void)book.begin({"", "", "", ""}); }) == "an act needs the name of who does it");
  CHECK(refusal([&] { (void)book.begin({"A", "", "\xff", ""}); }) == "the reason is not UTF-8");
  CHECK(refusal([&] { (void)book.act(2); }) == "the book has no act 2; its newest is 1");
}

TEST_CASE("without commit nothing stays") {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  {
    auto writer = book.begin(head("dropped"));
    CHECK(writer.act() == 2);
    writer.add(station(), {writer.add_file("a.csv", 1, std::string(64, '0'), "station"), 1});
  }
  CHECK(book.newest_act() == 1);
  CHECK(book.stations().empty());
  CHECK(book.files().empty());
  CHECK(add_ground(book) == 2);
}

TEST_CASE("an act is later than the one before, by 1 ms where the clock stands or runs back a little") {
  Folder folder;
  Instant clock = at("2024-05-01T08:00Z");
  store::use_clock([&] { return clock; });
  Book book = Book::create(folder.path(), head("new"));
  CHECK(book.act(1).time == clock);
  const auto next = [&] { return book.begin(head("next")).commit().time; };
  CHECK(next() == clock + Millis(1));
  clock -= std::chrono::minutes(5) - Millis(1);  // 5 minutes behind the act before, not more
  CHECK(next() == at("2024-05-01T08:00:00.002Z"));
  clock = at("2024-05-01T08:00:00.002Z") - std::chrono::minutes(5) - Millis(1);
  CHECK(
      refusal([&] { (void)book.begin(head("back")); }) ==
      "the clock says 2024-05-01T07:55:00.001Z, but the last act of the book is of 2024-05-01T08:00:00.002Z; "
      "set the clock right, else the order of acts cannot be trusted");
  CHECK(book.newest_act() == 3);
  clock = at("2024-05-01T09:00Z");
  CHECK(next() == clock);
  store::use_clock({});
  CHECK(book.known_at(at("2024-05-01T07:59Z")).act == 0);
  CHECK(book.known_at(at("2024-05-01T08:00Z")).act == 1);
  CHECK(book.known_at(at("2024-05-01T08:30Z")).act == 3);
  CHECK(book.known_at(at("2099-01-01T00:00Z")).act == 4);
}

namespace {

/// The canonical text of a row by the rules of schema/README.md, from what quote() and printf() of a plain
/// connection say: written without the store's code.
std::string canonical_row(SQLite::Statement& row) {
  std::string text;
  for (int i = 0; i < row.getColumnCount(); ++i) {
    const auto column = row.getColumn(i);
    if (column.isNull()) {
      text += "n,";
    } else if (column.isInteger()) {
      text += "i" + std::to_string(column.getInt64()) + ",";
    } else if (column.isFloat()) {
      const double value = column.getDouble();
      std::uint64_t bits = 0;
      std::memcpy(&bits, &value, sizeof bits);
      char hex[17];
      std::snprintf(hex, sizeof hex, "%016llx", static_cast<unsigned long long>(bits));
      text += "r" + std::string(hex) + ",";
    } else {
      const std::string value = column.getString();
      text += "t" + std::to_string(value.size()) + ":" + value + ",";
    }
  }
  return text + "\n";
}

/// What act `number` wrote into `table`, in the order of its primary key.
std::string canonical_rows(SQLite::Database& db, const std::string& table, std::int64_t number) {
  std::string order;
  for (const auto& name :
       plain::column(db, "SELECT name FROM pragma_table_info('" + table + "') WHERE pk > 0 ORDER BY pk")) {
    order += (order.empty() ? "" : ", ") + name;
  }
  SQLite::Statement rows(
      db, "SELECT * FROM \"" + table + "\" WHERE act = " + std::to_string(number) + " ORDER BY " + order);
  std::string text = table + "\n";
  while (rows.executeStep()) text += canonical_row(rows);
  return text;
}

}  // namespace

TEST_CASE("digests of rows and the chain follow the description that is given to others") {
  Folder folder;
  const TestClock clock;
  Book book = Book::create(folder.path(), head("new"));
  fill(book);
  auto db = plain::open(folder.path());
  std::string before(64, '0');
  std::size_t tables = 0;
  for (const Act& act : book.acts()) {
    nlohmann::json said;
    said["number"] = act.number;
    said["time_ms"] = to_ms(act.time);
    said["who"] = act.who;
    said["station"] = act.station;
    said["reason"] = act.reason;
    said["command"] = act.command;
    said["program"] = act.program;
    said["method"] = act.method;
    said["tables"] = nlohmann::json::array();
    for (const ActTable& table : act.tables) {
      CAPTURE(act.number, table.table);
      const std::string text = canonical_rows(db, table.table, act.number);
      CHECK(store::sha256_hex(text) == table.sha256);
      CHECK(table.rows == std::count(text.begin(), text.end(), '\n') - 1);
      said["tables"].push_back({{"table", table.table}, {"rows", table.rows}, {"sha256", table.sha256}});
      ++tables;
    }
    CHECK(store::sha256_hex(before + said.dump()) == act.hash);
    before = act.hash;
  }
  CHECK(tables >= 24);
}

TEST_CASE("SHA-256 is that of FIPS 180-4") {
  // NIST, Secure Hash Standard, FIPS 180-4 (2015); the values for "abc" and the empty text from memory.
  // text.
  CHECK(store::sha256_hex("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  CHECK(store::sha256_hex("") == "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
}

TEST_CASE("files are remembered with their act") {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  add_ground(book);
  add_stage(book);
  REQUIRE(book.files().size() == 2);
  CHECK(book.files({2}).size() == 1);
  const auto file = book.file(2);
  REQUIRE(file);
  CHECK(file->name == "stage.csv");
  CHECK(file->act == 3);
  CHECK(file->bytes == 1234);
  CHECK(file->kind == "stage");
  CHECK(file->sha256 == store::sha256_hex("stage"));
  CHECK_FALSE(book.file(3));
}

TEST_CASE("acts are read in part") {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  fill(book);
  CHECK(book.newest_act() == 6);
  const auto some = book.acts(2, 3);
  REQUIRE(some.size() == 2);
  CHECK(some[0].number == 2);
  CHECK(some[1].reason == "stage");
}
