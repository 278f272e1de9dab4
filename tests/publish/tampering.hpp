#pragma once
// Changing a book behind the program's back: its triggers are set aside for as long as that takes.

#include <SQLiteCpp/SQLiteCpp.h>

#include <string>
#include <vector>

namespace tampering {

inline void tamper(const std::string& path, const std::string& sql) {
  SQLite::Database db(path, SQLite::OPEN_READWRITE);
  std::vector<std::string> names, texts;
  SQLite::Statement triggers(db, "SELECT name, sql FROM sqlite_master WHERE type = 'trigger'");
  while (triggers.executeStep()) {
    names.push_back(triggers.getColumn(0).getString());
    texts.push_back(triggers.getColumn(1).getString());
  }
  triggers.reset();
  for (const auto& name : names) db.exec("DROP TRIGGER " + name);
  db.exec(sql);
  for (const auto& text : texts) db.exec(text);
}

}  // namespace tampering
