// Does the file still say what the acts say that they wrote?

#include <algorithm>
#include <map>
#include <set>

#include "store/book_impl.hpp"
#include "store/canonical.hpp"
#include "store/migrations.hpp"
#include "store/sql.hpp"
#include "store/stage_rows.hpp"

namespace scourbook::store {
namespace {

using Report = std::vector<Damage>;

/// SQL of every table, index, trigger and view by type and name.
std::map<std::string, std::string> schema_of(const SQLite::Database& db) {
  Query query(db, "SELECT type || ' ' || name, sql FROM sqlite_master WHERE sql IS NOT NULL");
  std::map<std::string, std::string> schema;
  while (query.next()) schema[query.text(0)] = query.text(1);
  return schema;
}

void check_schema(const SQLite::Database& db, Report& report) {
  SQLite::Database fresh(":memory:", SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
  migrate(fresh);
  const auto expected = schema_of(fresh), found = schema_of(db);
  for (const auto& [name, sql] : expected) {
    const auto at = found.find(name);
    if (at == found.end()) {
      report.push_back({"", 0, "the " + name + " of the schema is gone"});
    } else if (at->second != sql) {
      report.push_back({"", 0, "the " + name + " of the schema was changed"});
    }
  }
  for (const auto& [name, sql] : found) {
    if (expected.find(name) == expected.end())
      report.push_back({"", 0, "a foreign " + name + " is in the schema"});
  }
}

void check_file(const SQLite::Database& db, Report& report) {
  Query integrity(db, "PRAGMA integrity_check(20)");
  while (integrity.next()) {
    if (integrity.text(0) != "ok") report.push_back({"", 0, "SQLite finds: " + integrity.text(0)});
  }
  Query keys(db, "PRAGMA foreign_key_check");
  while (keys.next()) {
    report.push_back({keys.text(0), 0, "a row points to one of " + keys.text(2) + " that is not there"});
  }
}

/// The chain itself: numbers without gaps, rising times, hashes.
void check_chain(const std::vector<Act>& acts, Report& report) {
  std::string before = first_hash();
  std::int64_t expected = 1;
  std::optional<Instant> time;
  for (const Act& act : acts) {
    if (act.number != expected) {
      report.push_back(
          {"act", expected,
           "acts " + std::to_string(expected) + " to " + std::to_string(act.number - 1) + " are gone"});
    }
    if (time && act.time <= *time)
      report.push_back({"act", act.number, "it is not later than the act before it"});
    if (act.hash != chain_hash(before, act)) {
      report.push_back(
          {"act", act.number, "its hash does not follow from its content and the act before it"});
    }
    before = act.hash;
    time = act.time;
    expected = act.number + 1;
  }
}

/// The key of the current row, for a message: "station=TAR-1, number=3".
std::string key_of(const TableShape& table, SQLite::Statement& row) {
  std::string text;
  for (const auto& column : table.key) {
    text += (text.empty() ? "" : ", ") + column + "=" + row.getColumn(column.c_str()).getString();
  }
  return text;
}

struct Found {
  std::int64_t rows = 0;
  std::string sha256;
  std::string keys;  ///< of its first rows
};

/// Count and digest of every act that a table names.
std::map<std::int64_t, Found> digests_of(const SQLite::Database& db, const TableShape& table) {
  std::map<std::int64_t, Found> found;
  Query acts(db, "SELECT DISTINCT act FROM \"" + table.name + "\"");
  while (acts.next()) {
    const std::int64_t act = acts.integer(0);
    const ActTable digest = digest_of(db, table, act);
    found[act] = {digest.rows, digest.sha256, {}};
  }
  return found;
}

std::string first_keys(const SQLite::Database& db, const TableShape& table, std::int64_t act) {
  Query rows(db, "SELECT * FROM \"" + table.name + "\" WHERE act = ? LIMIT 3");
  rows.put(act);
  std::string text;
  while (rows.next()) text += (text.empty() ? "" : "; ") + key_of(table, rows.statement());
  return text;
}

void check_table(const SQLite::Database& db, const TableShape& table,
                 const std::map<std::int64_t, ActTable>& written, Report& report) {
  auto found = digests_of(db, table);
  for (const auto& [act, said] : written) {
    const auto at = found.find(act);
    const std::int64_t rows = at == found.end() ? 0 : at->second.rows;
    if (rows != said.rows) {
      report.push_back(
          {table.name, act,
           "the act wrote " + std::to_string(said.rows) + " rows, there are " + std::to_string(rows)});
    } else if (at->second.sha256 != said.sha256) {
      report.push_back({table.name, act,
                        "rows were changed since the act wrote them, among " + first_keys(db, table, act)});
    }
  }
  for (const auto& [act, what] : found) {
    if (written.count(act) > 0) continue;
    report.push_back({table.name, act, "rows that no act wrote: " + first_keys(db, table, act)});
  }
}

void check_pieces(const SQLite::Database& db, Report& report) {
  Query places(db, "SELECT DISTINCT station, month FROM stage_piece ORDER BY station, month");
  while (places.next()) {
    for (const Piece& piece : pieces_of(db, places.text(0), places.small(1), INT64_MAX)) {
      if (digest_of(piece) != piece.sha256) {
        report.push_back(
            {"stage_piece", piece.act, "piece " + std::to_string(piece.id) + " is not what its digest says"});
      }
      try {
        (void)readings_of(piece);
      } catch (const StoreError& error) {
        report.push_back({"stage_piece", piece.act, error.what()});
      }
    }
  }
}

}  // namespace

std::vector<Damage> Book::verify(const std::function<void(std::int64_t, std::int64_t)>& progress) const {
  const auto tell = [&](std::int64_t done, std::int64_t all) {
    if (progress) progress(done, all);
  };
  return guarded([&] {
    Report report;
    const SQLite::Database& db = impl_->db;
    check_file(db, report);
    check_schema(db, report);
    const std::vector<Act> all = acts();
    check_chain(all, report);
    // What the acts say they wrote, by table.
    std::map<std::string, std::map<std::int64_t, ActTable>> written;
    for (const Act& act : all) {
      for (const ActTable& table : act.tables) written[table.table][act.number] = table;
    }
    const auto tables = tables_of(db);
    const auto steps = static_cast<std::int64_t>(tables.size()) + 1;
    std::int64_t done = 0;
    for (const TableShape& table : tables) {
      tell(done++, steps);
      check_table(db, table, written[table.name], report);
      written.erase(table.name);
    }
    for (const auto& [name, acts_of_it] : written) {
      if (!acts_of_it.empty()) {
        report.push_back({name, acts_of_it.begin()->first, "the act wrote into a table that is gone"});
      }
    }
    check_pieces(db, report);
    tell(steps, steps);
    return report;
  });
}

}  // namespace scourbook::store
