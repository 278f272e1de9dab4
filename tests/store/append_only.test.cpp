// No program can change, delete or replace a row, whatever its pragmas: the triggers in the file refuse it.

#include <catch2/catch.hpp>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;

namespace {

/// A full book, and a plain connection to it.
struct Held {
  Folder folder;
  TestClock clock;
  Held() {
    store::Book book = store::Book::create(folder.path(), head("new"));
    fill(book);
  }
  SQLite::Database db() const { return plain::open(folder.path()); }
};

using Names = std::vector<std::string>;

Names columns(SQLite::Database& db, const std::string& table) {
  return plain::column(db, "SELECT name FROM pragma_table_info('" + table + "') ORDER BY cid");
}

/// Columns of the primary key and of every other unique key.
std::vector<Names> keys(SQLite::Database& db, const std::string& table) {
  std::vector<Names> all;
  all.push_back(
      plain::column(db, "SELECT name FROM pragma_table_info('" + table + "') WHERE pk > 0 ORDER BY pk"));
  for (const auto& index : plain::column(db, "SELECT name FROM pragma_index_list('" + table +
                                                 "') WHERE \"unique\" = 1 AND origin <> 'pk'")) {
    all.push_back(plain::column(db, "SELECT name FROM pragma_index_info('" + index + "') ORDER BY seqno"));
  }
  return all;
}

bool holds(const Names& names, const std::string& name) {
  return std::find(names.begin(), names.end(), name) != names.end();
}

/// "INSERT ... INTO table (columns) SELECT expressions FROM table LIMIT 1", each expression by `of`.
template <class Of>
std::string insert_of_itself(SQLite::Database& db, const std::string& verb, const std::string& table, Of of) {
  std::string names, values;
  for (const auto& column : columns(db, table)) {
    names += (names.empty() ? "\"" : ", \"") + column + "\"";
    values += (values.empty() ? "" : ", ") + of(column);
  }
  return verb + " INTO \"" + table + "\" (" + names + ") SELECT " + values + " FROM \"" + table +
         "\" WHERE true LIMIT 1";
}

std::string itself(const std::string& column) {
  return "\"" + column + "\"";
}

void check_refused(SQLite::Database& db, const std::string& sql, const std::string& message) {
  CAPTURE(sql);
  CHECK(plain::result_of(db, sql) == message);
}

const std::string kExists = ": a row with this key exists; rows of a book are never replaced";
const std::string kChanged = ": rows of a book are never changed; a correction is a new version";
const std::string kDeleted = ": rows of a book are never deleted";

}  // namespace

TEST_CASE("every table has a row in the book of these tests") {
  Held held;
  auto db = held.db();
  REQUIRE(plain::tables(db).size() >= 22);
  for (const auto& table : plain::tables(db)) {
    CAPTURE(table);
    CHECK(plain::one(db, "SELECT count(*) > 0 FROM \"" + table + "\"") == "1");
  }
}

TEST_CASE("a plain connection changes, deletes and replaces no row of any table") {
  Held held;
  auto db = held.db();
  const auto before = plain::content(db);
  for (const auto& table : plain::tables(db)) {
    const std::string name = "\"" + table + "\"";
    for (const auto& column : columns(db, table)) {
      const std::string set = " SET \"" + column + "\" = \"" + column + "\"";
      check_refused(db, "UPDATE " + name + set, table + kChanged);
      check_refused(db, "UPDATE OR REPLACE " + name + set, table + kChanged);
      check_refused(db, "UPDATE OR IGNORE " + name + set, table + kChanged);
    }
    check_refused(db, "DELETE FROM " + name, table + kDeleted);
    for (const std::string verb :
         {"INSERT", "INSERT OR REPLACE", "REPLACE", "INSERT OR IGNORE", "INSERT OR FAIL"}) {
      check_refused(db, insert_of_itself(db, verb, table, itself), table + kExists);
    }
    const std::string upsert = insert_of_itself(db, "INSERT", table, itself);
    check_refused(db, upsert + " ON CONFLICT DO NOTHING", table + kExists);
    const std::string set =
        "\"" + columns(db, table).back() + "\" = excluded.\"" + columns(db, table).back() + "\"";
    check_refused(db, upsert + " ON CONFLICT DO UPDATE SET " + set, table + kExists);
  }
  CHECK(plain::content(db) == before);
}

TEST_CASE("a key is recognised as text or real number, and by each of its unique keys alone") {
  Held held;
  auto db = held.db();
  const auto before = plain::content(db);
  int second_keys = 0;
  for (const auto& table : plain::tables(db)) {
    const auto all = keys(db, table);
    second_keys += static_cast<int>(all.size()) - 1;
    for (const std::string type : {"TEXT", "REAL"}) {
      const auto cast = [&](const std::string& column) {
        const bool is_number = plain::one(db, "SELECT type FROM pragma_table_info('" + table +
                                                  "') WHERE name = '" + column + "'") == "INTEGER";
        return holds(all.front(), column) && is_number ? "CAST(\"" + column + "\" AS " + type + ")"
                                                       : itself(column);
      };
      check_refused(db, insert_of_itself(db, "INSERT OR REPLACE", table, cast), table + kExists);
    }
    for (const Names& key : all) {
      const auto only_this = [&](const std::string& column) {
        bool in_another = false;
        for (const Names& other : all) in_another = in_another || holds(other, column);
        return in_another && !holds(key, column) ? "\"" + column + "\" + 1000" : itself(column);
      };
      check_refused(db, insert_of_itself(db, "INSERT OR REPLACE", table, only_this), table + kExists);
    }
  }
  CHECK(second_keys == 1);  // reach
  CHECK(plain::content(db) == before);
}

TEST_CASE("the rowid is no way around the key") {
  Held held;
  auto db = held.db();
  const auto before = plain::content(db);
  int count = 0;
  for (const auto& table :
       plain::column(db,
                     "SELECT name FROM pragma_table_list WHERE type = 'table' AND wr = 0 AND "
                     "name NOT LIKE 'sqlite_%'")) {
    ++count;
    const std::string key = keys(db, table).front().front();
    for (const std::string alias : {"rowid", "_rowid_", "oid"}) {
      std::string sql = insert_of_itself(db, "INSERT OR REPLACE", table, itself);
      for (const auto& [from, to] : {std::pair("(\"" + key + "\"", "(" + alias),
                                     std::pair("SELECT \"" + key + "\"", "SELECT " + alias)}) {
        const auto place = sql.find(from);
        REQUIRE(place != std::string::npos);
        sql.replace(place, from.size(), to);
      }
      check_refused(db, sql, table + kExists);
    }
  }
  CHECK(count == 3);
  CHECK(plain::content(db) == before);
}

TEST_CASE("our own connections fire triggers for what a replacement would delete") {
  Held held;
  auto db = held.db();
  // Without the insert trigger, recursive_triggers of our connections still refuses by the delete trigger.
  db.exec("DROP TRIGGER act_replaces_no_row");
  db.exec("PRAGMA recursive_triggers = ON");
  CHECK(plain::result_of(db, "INSERT OR REPLACE INTO act SELECT * FROM act") == "act" + kDeleted);
}

TEST_CASE("figures that are none are kept out by the file itself") {
  Held held;
  auto db = held.db();
  for (const auto& table : plain::tables(db)) {
    const auto all = keys(db, table);
    for (const auto& column :
         plain::column(db, "SELECT name FROM pragma_table_info('" + table + "') WHERE type = 'REAL'")) {
      const auto infinite = [&](const std::string& name) {
        if (name == column) return std::string("9e999");
        const bool number = plain::one(db, "SELECT type FROM pragma_table_info('" + table +
                                               "') WHERE name = '" + name + "'") == "INTEGER";
        return holds(all.front(), name) && number ? "\"" + name + "\" + 1000" : itself(name);
      };
      const std::string said = plain::result_of(db, insert_of_itself(db, "INSERT", table, infinite));
      CAPTURE(table, column, said);
      CHECK(said.find("CHECK constraint failed: ") == 0);
      CHECK(said.find(column) != std::string::npos);
    }
  }
}
