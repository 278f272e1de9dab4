#pragma once
// A book as any other program sees it: a plain SQLite connection with SQLite's own defaults.

#include <SQLiteCpp/SQLiteCpp.h>

#include <map>
#include <string>
#include <vector>

namespace plain {

inline SQLite::Database open(const std::string& path) {
  return SQLite::Database(path, SQLite::OPEN_READWRITE);
}

/// SQLite's message where the statement fails, else "done".
inline std::string result_of(SQLite::Database& db, const std::string& sql) {
  try {
    db.exec(sql);
    return "done";
  } catch (const SQLite::Exception& error) {
    return error.what();
  }
}

/// The first column of all rows as text.
inline std::vector<std::string> column(SQLite::Database& db, const std::string& sql) {
  SQLite::Statement query(db, sql);
  std::vector<std::string> all;
  while (query.executeStep()) all.push_back(query.getColumn(0).getString());
  return all;
}
inline std::string one(SQLite::Database& db, const std::string& sql) {
  const auto all = column(db, sql);
  return all.empty() ? "" : all.front();
}

inline std::vector<std::string> tables(SQLite::Database& db) {
  return column(
      db, "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' ORDER BY name");
}

/// All rows of all tables as text, each value as quote() writes it.
inline std::map<std::string, std::vector<std::string>> content(SQLite::Database& db) {
  std::map<std::string, std::vector<std::string>> all;
  for (const auto& table : tables(db)) {
    std::string row;
    for (const auto& name : column(db, "SELECT name FROM pragma_table_info('" + table + "')")) {
      row += (row.empty() ? "" : " || ',' || ") + ("quote(\"" + name + "\")");
    }
    all[table] = column(db, "SELECT " + row + " FROM \"" + table + "\" ORDER BY 1");
  }
  return all;
}

/// Takes the append-only triggers of a table away, as somebody who tampers would.
inline void drop_triggers(SQLite::Database& db, const std::string& table) {
  for (const auto& name :
       column(db, "SELECT name FROM sqlite_master WHERE type = 'trigger' AND tbl_name = '" + table + "'")) {
    db.exec("DROP TRIGGER " + name);
  }
}

/// Runs `sql` with the table's triggers away and puts them back as they were.
inline void tamper(SQLite::Database& db, const std::string& table, const std::string& sql) {
  const auto triggers =
      column(db, "SELECT sql FROM sqlite_master WHERE type = 'trigger' AND tbl_name = '" + table + "'");
  drop_triggers(db, table);
  db.exec(sql);
  for (const auto& trigger : triggers) db.exec(trigger);
}

}  // namespace plain
