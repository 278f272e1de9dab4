// Does the file still say what the acts say that they wrote?

#include "store/verify.hpp"

#include "store/book_impl.hpp"
#include "store/sql.hpp"

namespace scourbook::store {
namespace {

/// One state of the book for as long as it lives, whatever others write meanwhile.
class Snapshot {
 public:
  explicit Snapshot(SQLite::Database& db) : db_(db) { db_.exec("SAVEPOINT verify"); }
  ~Snapshot() { (void)db_.tryExec("RELEASE verify"); }
  Snapshot(const Snapshot&) = delete;
  Snapshot& operator=(const Snapshot&) = delete;

 private:
  SQLite::Database& db_;
};

/// The tables, or none where not even their names can be read.
std::vector<TableShape> readable_tables(const SQLite::Database& db, Report& report) {
  std::vector<TableShape> tables;
  attempt(report, "", 0, [&] { tables = tables_of(db); });
  return tables;
}

}  // namespace

std::vector<Damage> Book::verify(const std::function<void(std::int64_t, std::int64_t)>& progress) const {
  return guarded([&] {
    Report report;
    SQLite::Database& db = impl_->db;
    const Snapshot snapshot(db);
    const auto tables = readable_tables(db, report);
    const auto steps = static_cast<std::int64_t>(tables.size()) + 5;
    std::int64_t done = 0;
    const auto step = [&](const std::string& table, const auto& check) {
      attempt(report, table, 0, check);
      if (progress) progress(++done, steps);
    };
    Written written;
    step("", [&] { check_file(db, report); });
    step("", [&] { check_schema(db, report); });
    step("act", [&] { written = check_chain(db, report); });
    for (const TableShape& table : tables) {
      step(table.name, [&] { check_table(db, table, written, report); });
    }
    for (const auto& [name, acts] : written) {
      if (!acts.empty()) report.push_back({name, acts.begin()->first, "the table is gone"});
    }
    step("stage_piece", [&] { check_pieces(db, report); });
    step("publication", [&] { check_publications(db, report); });
    return report;
  });
}

}  // namespace scourbook::store
