#pragma once
// The numbered SQL files of migrations/sqlite, embedded at build time.

#include <vector>

namespace SQLite {
class Database;
}

namespace scourbook::store {

struct Migration {
  int number;
  const char* name;
  const char* sql;
};
/// By number, from 1, without gaps.
[[nodiscard]] const std::vector<Migration>& migrations();
[[nodiscard]] int newest_schema();

/// "Scbk": what SQLite's application_id of a book is.
inline constexpr int kApplicationId = 0x5363626b;

/// Runs the migrations that the book has not seen, inside a transaction of the caller. Throws
/// SQLite::Exception.
void lay_schema(SQLite::Database& db);
/// The same in a transaction of its own: all of them or none.
void migrate(SQLite::Database& db);

}  // namespace scourbook::store
