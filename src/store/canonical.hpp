#pragma once
// The canonical text of rows and acts, and their digests. schema/README.md describes it for other tools.

#include <string>
#include <string_view>
#include <vector>

#include "terms/act.hpp"

namespace SQLite {
class Database;
class Statement;
}  // namespace SQLite

namespace scourbook::store {

/// SHA-256 over any number of pieces.
class Sha256 {
 public:
  Sha256();
  ~Sha256();
  Sha256(const Sha256&) = delete;
  Sha256& operator=(const Sha256&) = delete;
  void add(std::string_view bytes);
  [[nodiscard]] std::string hex();  ///< once, at the end

 private:
  void* context_;
};

/// One table of a book and its key.
struct TableShape {
  std::string name;
  std::vector<std::string> key;
};
/// Every table but `act`, by name.
[[nodiscard]] std::vector<TableShape> tables_of(const SQLite::Database& db);

/// Columns of a row in their order: n for null, i and the number, r and the 16 hex digits of the binary64, t,
/// the number of bytes, a colon and the bytes; each followed by a comma; at the end a new line.
void append_canonical(SQLite::Statement& row, std::string& text);

/// Count and digest of the rows that `act` wrote into the table, in the order of its key. The digest begins
/// with the table's name and a new line.
[[nodiscard]] ActTable digest_of(const SQLite::Database& db, const TableShape& table, std::int64_t act);

/// JSON of an act without its hash: keys in alphabetical order, no white space, UTF-8. Throws StoreError
/// damaged where a text of the act is not UTF-8.
[[nodiscard]] std::string canonical_json(const Act& act);
/// The JSON array of an act's tables, as it stands in the act's row and in canonical_json.
[[nodiscard]] std::string tables_json(const std::vector<ActTable>& tables);
/// Throws StoreError damaged.
[[nodiscard]] std::vector<ActTable> parse_tables(const std::string& json);
/// SHA-256 of the hash before it (64 zeros before the first) and canonical_json.
[[nodiscard]] std::string chain_hash(const std::string& before, const Act& act);
[[nodiscard]] std::string first_hash();

}  // namespace scourbook::store
