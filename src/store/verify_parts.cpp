#include <set>

#include "store/migrations.hpp"
#include "store/publication_rows.hpp"
#include "store/sql.hpp"
#include "store/stage_rows.hpp"
#include "store/verify.hpp"
#include "terms/finding.hpp"

namespace scourbook::store {
namespace {

/// An entry of the schema: the table that it belongs to and its SQL.
struct Entry {
  std::string table;
  std::string sql;
};

/// Every table, index, trigger and view by type and name. Statistics that other tools gather say nothing.
std::map<std::string, Entry> schema_of(const SQLite::Database& db) {
  Query query(
      db,
      "SELECT type || ' ' || name, tbl_name, coalesce(sql, '') FROM sqlite_master WHERE name NOT LIKE "
      "'sqlite\\_stat_' ESCAPE '\\'");
  std::map<std::string, Entry> schema;
  while (query.next()) schema[query.text(0)] = {query.text(1), query.text(2)};
  return schema;
}

/// Text for people: of a damaged file it may be anything.
std::string shown(const std::string& text) {
  return is_utf8(text) && text.size() <= 200 ? text : in_quotes(text, 100);
}

/// The key of the current row, for a message: "station=TAR-1, number=3".
std::string key_of(const TableShape& table, SQLite::Statement& row) {
  std::string text;
  for (const auto& column : table.key) {
    text += (text.empty() ? "" : ", ") + column + "=" + row.getColumn(column.c_str()).getString();
  }
  return text;
}

std::string first_keys(const SQLite::Database& db, const TableShape& table, std::int64_t act) {
  Query rows(db, "SELECT * FROM \"" + table.name + "\" WHERE act = ? LIMIT 4");
  rows.put(act);
  std::string text;
  for (int i = 0; rows.next(); ++i) {
    if (i > 0) text += "; ";
    text += i == 3 ? std::string("...") : key_of(table, rows.statement());
  }
  return shown(text);
}

std::set<std::int64_t> acts_in(const SQLite::Database& db, const TableShape& table) {
  std::set<std::int64_t> acts;
  Query query(db, "SELECT DISTINCT act FROM \"" + table.name + "\"");
  while (query.next()) acts.insert(query.integer(0));
  return acts;
}

void check_act_rows(const SQLite::Database& db, const TableShape& table, const ActTable& said,
                    std::int64_t act, Report& report) {
  const ActTable found = digest_of(db, table, act);
  if (found.rows != said.rows) {
    report.push_back(
        {table.name, act,
         "the act wrote " + std::to_string(said.rows) + " rows, there are " + std::to_string(found.rows)});
  } else if (found.sha256 != said.sha256) {
    report.push_back(
        {table.name, act, "rows were changed since the act wrote them, among " + first_keys(db, table, act)});
  }
}

/// One act of the chain; what comes after it goes on from `act.hash`.
void check_link(const Act& act, const std::string& before, Report& report) {
  attempt(report, "act", act.number, [&] {
    if (act.hash == chain_hash(before, act)) return;
    report.push_back({"act", act.number, "its hash does not follow from its content and the act before it"});
  });
}

}  // namespace

void check_file(const SQLite::Database& db, Report& report) {
  attempt(report, "", 0, [&] {
    Query integrity(db, "PRAGMA integrity_check(20)");
    while (integrity.next()) {
      if (integrity.text(0) != "ok") report.push_back({"", 0, "SQLite finds: " + shown(integrity.text(0))});
    }
  });
  Query keys(db, "PRAGMA foreign_key_check");
  while (keys.next()) {
    report.push_back({keys.text(0), 0, "a row names a row of " + keys.text(2) + " that is not there"});
  }
}

void check_schema(const SQLite::Database& db, Report& report) {
  SQLite::Database fresh(":memory:", SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
  migrate(fresh);
  const auto expected = schema_of(fresh), found = schema_of(db);
  for (const auto& [name, entry] : expected) {
    const auto at = found.find(name);
    if (at == found.end()) {
      report.push_back({entry.table, 0, "the " + name + " of the schema is gone"});
    } else if (at->second.sql != entry.sql || at->second.table != entry.table) {
      report.push_back({entry.table, 0, "the " + name + " of the schema was changed"});
    }
  }
  for (const auto& [name, entry] : found) {
    if (expected.count(name) > 0) continue;
    report.push_back({shown(entry.table), 0, "the " + shown(name) + " does not belong to the schema"});
  }
}

Written check_chain(const SQLite::Database& db, Report& report) {
  Written written;
  Query query(
      db,
      "SELECT number, time_ms, who, station, reason, command, program, method, hash, tables FROM act ORDER "
      "BY number");
  std::string before = first_hash();
  std::int64_t expected = 1, time_ms = INT64_MIN;
  while (query.next()) {
    Columns c(query);
    Act act;
    act.number = c.integer();
    act.time = from_ms(c.integer());
    for (std::string* text : {&act.who, &act.station, &act.reason, &act.command, &act.program})
      *text = c.text();
    act.method = c.small();
    act.hash = c.text();
    const std::string tables = c.text();
    if (act.number != expected) {
      report.push_back(
          {"act", expected,
           "acts " + std::to_string(expected) + " to " + std::to_string(act.number - 1) + " are gone"});
    }
    if (to_ms(act.time) <= time_ms)
      report.push_back({"act", act.number, "it is not later than the act before it"});
    attempt(report, "act", act.number, [&] {
      act.tables = parse_tables(tables);
      if (tables_json(act.tables) != tables) {
        report.push_back({"act", act.number, "its list of tables was written anew"});
      }
      for (const ActTable& table : act.tables) written[table.table][act.number] = table;
    });
    check_link(act, before, report);
    before = act.hash;
    time_ms = to_ms(act.time);
    expected = act.number + 1;
  }
  return written;
}

void check_table(const SQLite::Database& db, const TableShape& table, Written& written, Report& report) {
  const auto said = written[table.name];
  written.erase(table.name);
  auto found = acts_in(db, table);
  for (const auto& [act, rows] : said) {
    found.erase(act);
    attempt(report, table.name, act,
            [&, act = act, &rows = rows] { check_act_rows(db, table, rows, act, report); });
  }
  for (const std::int64_t act : found) {
    report.push_back({table.name, act, "rows that no act wrote: " + first_keys(db, table, act)});
  }
}

void check_pieces(const SQLite::Database& db, Report& report) {
  std::set<std::int64_t> files;
  Query ids(db, "SELECT id FROM file");
  while (ids.next()) files.insert(ids.integer(0));
  for_each_piece(db, [&](const Piece& piece) {
    const std::string name = "piece " + std::to_string(piece.id);
    if (digest_of(piece) != piece.sha256) {
      report.push_back({"stage_piece", piece.act, name + " is not what its digest says"});
    }
    attempt(report, "stage_piece", piece.act, [&] {
      std::set<std::int64_t> named;
      for (const PieceReading& reading : readings_of(piece)) named.insert(reading.file);
      for (const std::int64_t file : named) {
        if (files.count(file) > 0) continue;
        report.push_back({"stage_piece", piece.act,
                          name + " names file " + std::to_string(file) + ", which is not there"});
      }
    });
  });
}

void check_publications(const SQLite::Database& db, Report& report) {
  Query query(db, "SELECT station, number, act, sha256 FROM publication ORDER BY station, number");
  while (query.next()) {
    const std::string station = query.text(0);
    const int number = query.small(1);
    if (figures_digest(db, station, number) == query.text(3)) continue;
    report.push_back({"publication", query.integer(2),
                      "the figures of publication " + std::to_string(number) + " of " + shown(station) +
                          " are not what its digest says"});
  }
}

}  // namespace scourbook::store
