#pragma once
// The parts of Book::verify(). Each appends what it finds; none throws for damage.

#include <SQLiteCpp/SQLiteCpp.h>

#include <map>
#include <string>
#include <vector>

#include "store/book.hpp"
#include "store/canonical.hpp"

namespace scourbook::store {

using Report = std::vector<Damage>;

/// Runs one check; where it cannot even read the book, that is the finding, under `table` and `act`.
template <class Check>
void attempt(Report& report, const std::string& table, std::int64_t act, Check check) {
  try {
    check();
  } catch (const StoreError& error) {
    report.push_back({table, act, error.what()});
  } catch (const SQLite::Exception& error) {
    report.push_back({table, act, std::string("SQLite cannot read it: ") + error.what()});
  }
}

/// SQLite's own integrity check, and rows that point to rows that are not there.
void check_file(const SQLite::Database& db, Report& report);
/// Tables, triggers, indexes and views against those that the migrations make.
void check_schema(const SQLite::Database& db, Report& report);

/// What acts say that they wrote: by table, then by act.
using Written = std::map<std::string, std::map<std::int64_t, ActTable>>;
/// The chain: numbers without gaps, rising times, hashes.
[[nodiscard]] Written check_chain(const SQLite::Database& db, Report& report);
/// The rows of a table against what acts say; uses up its part of `written`.
void check_table(const SQLite::Database& db, const TableShape& table, Written& written, Report& report);

/// Digest of every stage piece, its lists, the files it names.
void check_pieces(const SQLite::Database& db, Report& report);
/// Digest of every publication.
void check_publications(const SQLite::Database& db, Report& report);

}  // namespace scourbook::store
