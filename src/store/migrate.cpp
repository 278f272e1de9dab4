#include <SQLiteCpp/SQLiteCpp.h>

#include <string>

#include "store/migrations.hpp"

namespace scourbook::store {
namespace {

int schema_of(SQLite::Database& db) {
  return db.execAndGet("PRAGMA user_version").getInt();
}

}  // namespace

int newest_schema() {
  return migrations().back().number;
}

void lay_schema(SQLite::Database& db) {
  const int held = schema_of(db);
  for (const Migration& migration : migrations()) {
    if (migration.number <= held) continue;
    db.exec(migration.sql);
    db.exec("PRAGMA user_version = " + std::to_string(migration.number));
  }
}

void migrate(SQLite::Database& db) {
  if (schema_of(db) >= newest_schema()) return;
  // Another program may migrate at the same time: the schema counts as it is once the lock is held.
  SQLite::Transaction transaction(db, SQLite::TransactionBehavior::IMMEDIATE);
  lay_schema(db);
  transaction.commit();
}

}  // namespace scourbook::store
