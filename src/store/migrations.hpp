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

/// Brings the schema to the newest, each migration in a transaction of its own. Throws SQLite::Exception.
void migrate(SQLite::Database& db);

}  // namespace scourbook::store
