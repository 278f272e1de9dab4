// schema/sqlite.sql is what the migrations make, as SQLite reports it.

#include <catch2/catch.hpp>

#include <cstdlib>
#include <fstream>
#include <set>

#include "store/full_book.hpp"
#include "store/migrations.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;

namespace {

const std::string kCommitted = SCOURBOOK_TESTS_DIR "/../schema/sqlite.sql";

std::string content_of(const std::string& path) {
  std::ifstream in(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), {}};
}

/// Tables with what belongs to each, then views.
std::string schema_of(SQLite::Database& db) {
  std::string text =
      "-- The schema of a book as SQLite reports it, made by the migrations of migrations/sqlite. Not to be "
      "changed by "
      "hand.\n-- README.md beside it explains it.\n\nPRAGMA application_id = " +
      plain::one(db, "PRAGMA application_id") +
      ";\nPRAGMA user_version = " + plain::one(db, "PRAGMA user_version") + ";\n";
  for (const auto& sql : plain::column(
           db,
           "SELECT sql FROM sqlite_master WHERE sql IS NOT NULL ORDER BY type = 'view', tbl_name, type <> "
           "'table', type, name")) {
    text += "\n" + sql + ";\n";
  }
  return text;
}

}  // namespace

TEST_CASE("the committed schema is the one that migrations make") {
  const Folder folder;
  { const Book book = Book::create(folder.path(), head("new")); }
  auto db = plain::open(folder.path());
  const std::string made = schema_of(db);
  if (std::getenv("SCOURBOOK_RENEW") != nullptr) std::ofstream(kCommitted, std::ios::binary) << made;
  INFO("to renew schema/sqlite.sql run this test with SCOURBOOK_RENEW=1, and read the change as a diff");
  CHECK(content_of(kCommitted) == made);
}

TEST_CASE("the committed schema makes the same tables, triggers, indexes and views again") {
  SQLite::Database db(":memory:", SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
  db.exec(content_of(kCommitted));
  CHECK(schema_of(db) == content_of(kCommitted));
}

TEST_CASE("every table is append-only, strict, names its act, and is explained") {
  const Folder folder;
  { const Book book = Book::create(folder.path(), head("new")); }
  auto db = plain::open(folder.path());
  const std::string readme = content_of(SCOURBOOK_TESTS_DIR "/../schema/README.md");
  for (const auto& table : plain::tables(db)) {
    CAPTURE(table);
    const auto triggers =
        plain::column(db, "SELECT name FROM sqlite_master WHERE type = 'trigger' AND tbl_name = '" + table +
                              "' ORDER BY name");
    CHECK(triggers == std::vector<std::string>{table + "_keeps_rows", table + "_loses_no_row",
                                               table + "_replaces_no_row"});
    CHECK(plain::one(db, "SELECT strict FROM pragma_table_list WHERE name = '" + table + "'") == "1");
    if (table != "act") {
      CHECK(plain::one(db, "SELECT count(*) FROM pragma_foreign_key_list('" + table +
                               "') WHERE \"table\" = 'act' AND \"from\" = 'act'") == "1");
      CHECK(plain::one(db, "SELECT \"notnull\" FROM pragma_table_info('" + table + "') WHERE name = 'act'") ==
            "1");
    }
    CHECK(readme.find("`" + table + "`") != std::string::npos);
    for (const auto& column : plain::column(db, "SELECT name FROM pragma_table_info('" + table + "')")) {
      CAPTURE(column);
      CHECK(readme.find("`" + column + "`") != std::string::npos);
    }
  }
  for (const auto& view : plain::column(db, "SELECT name FROM sqlite_master WHERE type = 'view'")) {
    CAPTURE(view);
    CHECK(readme.find("`" + view + "`") != std::string::npos);
    CHECK(plain::result_of(db, "SELECT count(*) FROM \"" + view + "\"") == "done");
  }
}

TEST_CASE("migrations are numbered from 1 without gaps, and end at the newest schema") {
  int expected = 0;
  for (const auto& migration : store::migrations()) {
    CHECK(migration.number == ++expected);
    CHECK(std::string(migration.name).size() > 5);
  }
  CHECK(store::newest_schema() == expected);
}

TEST_CASE("a schema is laid once: laying it again changes nothing") {
  SQLite::Database db(":memory:", SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
  store::migrate(db);
  const std::string once = schema_of(db);
  store::migrate(db);
  CHECK(schema_of(db) == once);
  CHECK(plain::one(db, "PRAGMA user_version") == std::to_string(store::newest_schema()));
  CHECK(plain::one(db, "PRAGMA application_id") == std::to_string(store::kApplicationId));
}
