#include <SQLiteCpp/SQLiteCpp.h>

#include <string>

#include "store/migrations.hpp"

namespace scourbook::store {

int newest_schema() {
  return migrations().back().number;
}

void migrate(SQLite::Database& db) {
  const int held = db.execAndGet("PRAGMA user_version").getInt();
  for (const Migration& migration : migrations()) {
    if (migration.number <= held) continue;
    SQLite::Transaction transaction(db, SQLite::TransactionBehavior::IMMEDIATE);
    db.exec(migration.sql);
    db.exec("PRAGMA user_version = " + std::to_string(migration.number));
    transaction.commit();
  }
}

}  // namespace scourbook::store
