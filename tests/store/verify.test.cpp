// Whatever somebody changes in the file behind the program's back, verify() says so, by table and act.

#include <catch2/catch.hpp>

#include <cstring>
#include <fstream>
#include <random>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::Damage;
using store::StoreError;

namespace {

/// A full book in a file, closed.
struct Held {
  Folder folder;
  TestClock clock;
  Held() {
    Book book = Book::create(folder.path(), head("new"));
    fill(book);
  }
  SQLite::Database db() const { return plain::open(folder.path()); }
  std::vector<Damage> verified() const { return Book::open_to_read(folder.path()).verify(); }
  /// A fresh copy to spoil.
  std::string copy() const {
    const std::string to = folder.path("copy.scourbook");
    for (const char* end : {"-wal", "-shm"}) std::filesystem::remove(to + end);
    std::filesystem::copy_file(folder.path(), to, std::filesystem::copy_options::overwrite_existing);
    return to;
  }
};

std::string text_of(const std::vector<Damage>& found) {
  std::string text;
  for (const auto& damage : found)
    text += damage.table + " " + std::to_string(damage.act) + ": " + damage.text + "\n";
  return text;
}

bool names(const std::vector<Damage>& found, const std::string& table, std::int64_t act) {
  return std::any_of(found.begin(), found.end(),
                     [&](const Damage& damage) { return damage.table == table && damage.act == act; });
}

std::vector<std::string> columns(SQLite::Database& db, const std::string& table) {
  return plain::column(db, "SELECT name FROM pragma_table_info('" + table + "') ORDER BY cid");
}

/// The key of one row as SQL, and the act that wrote it.
struct Row {
  std::string where;
  std::int64_t act = 0;
};
Row last_row(SQLite::Database& db, const std::string& table) {
  Row row;
  std::string key, order;
  for (const auto& name :
       plain::column(db, "SELECT name FROM pragma_table_info('" + table + "') WHERE pk > 0 ORDER BY pk")) {
    key += (key.empty() ? "'" : " || ' AND ") + name + " = ' || quote(\"" + name + "\")";
    order += (order.empty() ? "" : ", ") + name + " DESC";
  }
  const std::string tail = " FROM \"" + table + "\" ORDER BY " + order + " LIMIT 1";
  row.where = plain::one(db, "SELECT " + key + tail);
  row.act = std::stoll(plain::one(db, (table == "act" ? "SELECT number" : "SELECT act") + tail));
  return row;
}

/// Another value of the same type that the table's own constraints accept where they are lenient.
std::string other_value(SQLite::Database& db, const std::string& table, const std::string& column,
                        const Row& row) {
  const std::string type =
      plain::one(db, "SELECT typeof(\"" + column + "\") FROM \"" + table + "\" WHERE " + row.where);
  if (type == "text") return "\"" + column + "\" || 'x'";
  if (type == "real") return "\"" + column + "\" * 0.5 + 1e-9";
  if (type == "integer") return "\"" + column + "\" + 1";
  return plain::one(db, "SELECT type FROM pragma_table_info('" + table + "') WHERE name = '" + column +
                            "'") == "TEXT"
             ? "'x'"
             : "1";
}

}  // namespace

TEST_CASE("a book that nobody touched is clean") {
  const Held held;
  CHECK(text_of(held.verified()).empty());
}

TEST_CASE("progress rises to its end") {
  const Held held;
  std::int64_t last = 0, all = 0;
  CHECK(Book::open_to_read(held.folder.path())
            .verify([&](std::int64_t done, std::int64_t total) {
              CHECK(done > last);
              last = done;
              all = total;
            })
            .empty());
  CHECK(last == all);
  CHECK(all > 20);
}

TEST_CASE("a changed value of any column of any table is found by table and act") {
  const Held held;
  auto origin = held.db();
  int changes = 0;
  for (const auto& table : plain::tables(origin)) {
    for (const auto& column : columns(origin, table)) {
      const std::string path = held.copy();
      {
        auto db = plain::open(path);
        db.exec("PRAGMA ignore_check_constraints = ON");
        const Row row = last_row(db, table);
        const std::string set = "UPDATE \"" + table + "\" SET \"" + column +
                                "\" = " + other_value(db, table, column, row) + " WHERE " + row.where;
        plain::tamper(db, table, set);
        REQUIRE(db.getChanges() == 1);
        db.exec("PRAGMA wal_checkpoint(TRUNCATE)");
        CAPTURE(set);
        const auto found = Book::open_to_read(path).verify();
        CAPTURE(text_of(found));
        CHECK(names(found, table, row.act));
      }
      ++changes;
    }
  }
  CHECK(changes > 200);
}

TEST_CASE("a deleted row of any table is found by table and act") {
  const Held held;
  auto origin = held.db();
  for (const auto& table : plain::tables(origin)) {
    const std::string path = held.copy();
    auto db = plain::open(path);
    const Row row = last_row(db, table);
    plain::tamper(db, table, "DELETE FROM \"" + table + "\" WHERE " + row.where);
    const auto found = Book::open_to_read(path).verify();
    CAPTURE(table, row.where, text_of(found));
    if (table == "act") {
      // The last act: its rows are left without one.
      CHECK(names(found, "publication", row.act));
      CHECK(names(found, "replay", row.act));
    } else {
      CHECK(names(found, table, row.act));
    }
  }
}

TEST_CASE("an added row of any table is found by table and act") {
  const Held held;
  auto origin = held.db();
  for (const auto& table : plain::tables(origin)) {
    const std::string path = held.copy();
    auto db = plain::open(path);
    const Row row = last_row(db, table);
    std::string names_of, values;
    for (const auto& column : columns(db, table)) {
      const bool key = plain::one(db, "SELECT pk > 0 AND type = 'INTEGER' FROM pragma_table_info('" + table +
                                          "') WHERE name = '" + column + "'") == "1";
      const bool act_in_key = key && column == "act";
      names_of += (names_of.empty() ? "" : ", ") + column;
      values += (values.empty() ? "" : ", ") + (act_in_key ? "2" : key ? column + " + 1" : column);
    }
    // Triggers let a new key in: whoever adds a row need not even drop them.
    db.exec("INSERT INTO \"" + table + "\" (" + names_of + ") SELECT " + values + " FROM \"" + table +
            "\" WHERE " + row.where);
    const auto found = Book::open_to_read(path).verify();
    CAPTURE(table, row.where, text_of(found));
    const std::int64_t act = table == "act" ? row.act + 1 : table == "setting" ? 2 : row.act;
    CHECK(names(found, table, act));
  }
}

TEST_CASE("a changed act breaks the chain at itself and after it") {
  const Held held;
  const std::string path = held.copy();
  {
    auto db = plain::open(path);
    plain::tamper(db, "act", "UPDATE act SET who = 'somebody else' WHERE number = 3");
  }
  CHECK(text_of(Book::open_to_read(path).verify()) ==
        "act 3: its hash does not follow from its content and the act before it\n");
  {
    auto db = plain::open(path);
    plain::tamper(db, "act", "UPDATE act SET hash = '" + std::string(64, 'a') + "' WHERE number = 3");
  }
  CHECK(text_of(Book::open_to_read(path).verify()) ==
        "act 3: its hash does not follow from its content and the act before it\n"
        "act 4: its hash does not follow from its content and the act before it\n");
}

TEST_CASE("an act taken out of the middle, with all its rows, is found") {
  const Held held;
  const std::string path = held.copy();
  {
    auto db = plain::open(path);
    for (const auto& table : plain::tables(db)) {
      plain::tamper(db, table,
                    "DELETE FROM \"" + table + "\" WHERE " + (table == "act" ? "number" : "act") + " = 5");
    }
  }
  const std::string text = text_of(Book::open_to_read(path).verify());
  CAPTURE(text);
  CHECK(text.find("act 5: acts 5 to 5 are gone\n") != std::string::npos);
  CHECK(text.find("act 6: its hash does not follow") != std::string::npos);
}

TEST_CASE("an act whose texts or list of tables cannot be read is a finding, not an exception") {
  const Held held;
  for (const auto& [set, expected] :
       {std::pair("tables = '[1'", "act 3: its list of tables cannot be read\n"),
        std::pair("tables = tables || ' '", "act 3: its list of tables was written anew\n"),
        std::pair("who = CAST(x'ff' AS TEXT)", "act 3: it holds a text that is not UTF-8\n"),
        std::pair("time_ms = 0", "act 3: it is not later than the act before it\n")}) {
    const std::string path = held.copy();
    {
      auto db = plain::open(path);
      plain::tamper(db, "act", std::string("UPDATE act SET ") + set + " WHERE number = 3");
    }
    const std::string text = text_of(Book::open_to_read(path).verify());
    CAPTURE(set, text);
    CHECK(text.find(expected) != std::string::npos);
  }
}

TEST_CASE("a schema that was changed is damage") {
  const Held held;
  const auto after = [&](const std::string& sql) {
    const std::string path = held.copy();
    {
      auto db = plain::open(path);
      db.exec(sql);
    }
    return text_of(Book::open_to_read(path).verify());
  };
  CHECK(after("DROP TRIGGER act_keeps_rows") == "act 0: the trigger act_keeps_rows of the schema is gone\n");
  CHECK(
      after("DROP TRIGGER curve_loses_no_row; CREATE TRIGGER curve_loses_no_row BEFORE DELETE ON curve BEGIN "
            "SELECT 1; END") == "curve 0: the trigger curve_loses_no_row of the schema was changed\n");
  CHECK(after("DROP VIEW stage") == "stage 0: the view stage of the schema is gone\n");
  CHECK(after("DROP INDEX stage_piece_of_month") ==
        "stage_piece 0: the index stage_piece_of_month of the schema is gone\n");
  CHECK(after("CREATE TABLE mine (act INTEGER, a TEXT PRIMARY KEY)")
            .find("mine 0: the table mine does not belong to the schema\n") != std::string::npos);
  CHECK(after("CREATE TRIGGER quiet BEFORE INSERT ON gauging BEGIN SELECT RAISE(IGNORE); END") ==
        "gauging 0: the trigger quiet does not belong to the schema\n");
  CHECK(after("ALTER TABLE station ADD COLUMN more TEXT")
            .find("station 0: the table station of the schema was changed\n") == 0);
  CHECK(after("DROP TABLE curve_band").find("curve_band 4: the table is gone\n") != std::string::npos);
  // Statistics that a tool gathered say nothing about the content.
  CHECK(after("ANALYZE") == "");
}

TEST_CASE("a piece whose digests all fit but whose lists do not is found") {
  const Held held;
  const std::string path = held.copy();
  {
    auto db = plain::open(path);
    plain::tamper(db, "stage_piece", "UPDATE stage_piece SET line_runs = '[[0,77,5]]' WHERE id = 1");
  }
  const std::string text = text_of(Book::open_to_read(path).verify());
  CAPTURE(text);
  CHECK(text.find("stage_piece 3: piece 1 is not what its digest says\n") != std::string::npos);
  CHECK(text.find("stage_piece 3: piece 1 names file 77, which is not there\n") != std::string::npos);
  CHECK(text.find("stage_piece 3: rows were changed since the act wrote them, among id=1; id=2\n") !=
        std::string::npos);
}

TEST_CASE("a changed figure names its publication") {
  const Held held;
  const std::string path = held.copy();
  {
    auto db = plain::open(path);
    plain::tamper(db, "publication_day", "UPDATE publication_day SET mean = mean + 1");
  }
  const std::string text = text_of(Book::open_to_read(path).verify());
  CAPTURE(text);
  CHECK(text.find("publication_day 6: rows were changed since the act wrote them, among station=TAR-1, "
                  "publication=1, "
                  "day=18292; station=TAR-1, publication=1, day=18293\n") != std::string::npos);
  CHECK(text.find("publication 6: the figures of publication 1 of TAR-1 are not what its digest says\n") !=
        std::string::npos);
}

TEST_CASE("a row that names one that is not there is found") {
  const Held held;
  const std::string path = held.copy();
  {
    auto db = plain::open(path);
    db.exec("PRAGMA foreign_keys = OFF");
    plain::tamper(db, "reach", "DELETE FROM reach WHERE row = 2");
  }
  const std::string text = text_of(Book::open_to_read(path).verify());
  CAPTURE(text);
  CHECK(text.find("curve_reach 0: a row names a row of reach that is not there\n") != std::string::npos);
  CHECK(text.find("reach 2: the act wrote 3 rows, there are 2\n") != std::string::npos);
}

TEST_CASE("verify sees one state while another connection writes") {
  const Held held;
  Book reader = Book::open_to_read(held.folder.path());
  Book writer = Book::open_to_write(held.folder.path());
  int acts = 0;
  const auto found = reader.verify([&](std::int64_t, std::int64_t) {
    take(writer, series("2021-01-01T00:00Z", 3, 1000 * ++acts, 60 * 24 * 30), true);
  });
  CHECK(text_of(found).empty());
  CHECK(acts > 20);
  CHECK(reader.verify().empty());
}

TEST_CASE("a flipped bit anywhere in the file is noticed, or changes nothing that the book says") {
  const Held held;
  const std::string path = held.copy();
  auto origin = held.db();
  const auto content = plain::content(origin);
  const auto size = static_cast<std::int64_t>(std::filesystem::file_size(path));
  std::mt19937_64 random(1);
  int noticed = 0, harmless = 0;
  for (std::int64_t offset = 0; offset < size;
       offset += offset < 100 ? 1 : 1 + std::int64_t(random() % 900)) {
    std::fstream file(path, std::ios::binary | std::ios::in | std::ios::out);
    const int byte = file.seekg(offset).get();
    const int flipped = byte ^ (1 << (random() % 8));
    file.seekp(offset).put(static_cast<char>(flipped)).flush();
    CAPTURE(offset, byte, flipped);
    bool clean = false;
    try {
      clean = Book::open_to_read(path).verify().empty();
    } catch (const StoreError&) {
      // refused as no book, newer, damaged: noticed
    }
    if (clean) {
      auto db = plain::open(path);
      CHECK(plain::content(db) == content);
      ++harmless;
    } else {
      ++noticed;
    }
    file.seekp(offset).put(static_cast<char>(byte)).flush();
  }
  CAPTURE(noticed, harmless);
  CHECK(noticed > 150);
}
