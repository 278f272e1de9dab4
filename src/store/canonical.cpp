#include "store/canonical.hpp"

#include <SQLiteCpp/SQLiteCpp.h>
#include <fmt/format.h>
#include <openssl/evp.h>
#include <sqlite3.h>

#include <array>
#include <bit>
#include <cassert>
#include <iterator>
#include <nlohmann/json.hpp>

#include "store/book.hpp"

namespace scourbook::store {
namespace {

EVP_MD_CTX* context_of(void* context) {
  return static_cast<EVP_MD_CTX*>(context);
}

std::string quoted(const std::string& name) {
  return "\"" + name + "\"";
}

std::string joined(const std::vector<std::string>& names) {
  std::string text;
  for (const auto& name : names) text += (text.empty() ? "" : ", ") + quoted(name);
  return text;
}

}  // namespace

Sha256::Sha256() : context_(EVP_MD_CTX_new()) {
  const int ok = EVP_DigestInit_ex(context_of(context_), EVP_sha256(), nullptr);
  assert(ok == 1);
  (void)ok;
}
Sha256::~Sha256() {
  EVP_MD_CTX_free(context_of(context_));
}

void Sha256::add(std::string_view bytes) {
  EVP_DigestUpdate(context_of(context_), bytes.data(), bytes.size());
}

std::string Sha256::hex() {
  std::array<unsigned char, 32> digest{};
  EVP_DigestFinal_ex(context_of(context_), digest.data(), nullptr);
  std::string text;
  for (unsigned char byte : digest) fmt::format_to(std::back_inserter(text), "{:02x}", byte);
  return text;
}

std::string sha256_hex(std::string_view bytes) {
  Sha256 digest;
  digest.add(bytes);
  return digest.hex();
}

std::vector<TableShape> tables_of(const SQLite::Database& db) {
  std::vector<TableShape> tables;
  SQLite::Statement names(
      db,
      "SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' AND name "
      "<> 'act' ORDER BY name");
  while (names.executeStep()) {
    TableShape table{names.getColumn(0).getString(), {}};
    SQLite::Statement key(db, "SELECT name FROM pragma_table_info(?) WHERE pk > 0 ORDER BY pk");
    key.bind(1, table.name);
    while (key.executeStep()) table.key.push_back(key.getColumn(0).getString());
    tables.push_back(std::move(table));
  }
  return tables;
}

void append_canonical(SQLite::Statement& row, std::string& text) {
  auto out = std::back_inserter(text);
  for (int i = 0; i < row.getColumnCount(); ++i) {
    const SQLite::Column column = row.getColumn(i);
    switch (column.getType()) {
      case SQLITE_NULL:
        text += 'n';
        break;
      case SQLITE_INTEGER:
        fmt::format_to(out, "i{}", column.getInt64());
        break;
      case SQLITE_FLOAT:
        fmt::format_to(out, "r{:016x}", std::bit_cast<std::uint64_t>(column.getDouble()));
        break;
      default: {
        const auto* bytes = static_cast<const char*>(column.getBlob());
        const auto size = static_cast<std::size_t>(column.getBytes());
        fmt::format_to(out, "t{}:", size);
        if (size > 0) text.append(bytes, size);
      }
    }
    text += ',';
  }
  text += '\n';
}

ActTable digest_of(const SQLite::Database& db, const TableShape& table, std::int64_t act) {
  SQLite::Statement rows(
      db, fmt::format("SELECT * FROM {} WHERE act = ? ORDER BY {}", quoted(table.name), joined(table.key)));
  rows.bind(1, act);
  ActTable result{table.name, 0, {}};
  Sha256 digest;
  digest.add(table.name + "\n");
  std::string text;
  while (rows.executeStep()) {
    ++result.rows;
    text.clear();
    append_canonical(rows, text);
    digest.add(text);
  }
  result.sha256 = digest.hex();
  return result;
}

std::string tables_json(const std::vector<ActTable>& tables) {
  nlohmann::json json = nlohmann::json::array();
  for (const ActTable& table : tables) {
    json.push_back({{"rows", table.rows}, {"sha256", table.sha256}, {"table", table.table}});
  }
  return json.dump();
}

std::vector<ActTable> parse_tables(const std::string& json) {
  try {
    std::vector<ActTable> tables;
    for (const auto& table : nlohmann::json::parse(json)) {
      tables.push_back({table.at("table"), table.at("rows"), table.at("sha256")});
    }
    return tables;
  } catch (const nlohmann::json::exception&) {
    throw StoreError(StoreError::Kind::damaged, "its list of tables cannot be read");
  }
}

std::string canonical_json(const Act& act) {
  const nlohmann::json json = {{"command", act.command},
                               {"method", act.method},
                               {"number", act.number},
                               {"program", act.program},
                               {"reason", act.reason},
                               {"station", act.station},
                               {"tables", nlohmann::json::parse(tables_json(act.tables))},
                               {"time_ms", to_ms(act.time)},
                               {"who", act.who}};
  try {
    return json.dump();
  } catch (const nlohmann::json::exception&) {
    throw StoreError(StoreError::Kind::damaged, "it holds a text that is not UTF-8");
  }
}

std::string first_hash() {
  return std::string(64, '0');
}

std::string chain_hash(const std::string& before, const Act& act) {
  return sha256_hex(before + canonical_json(act));
}

}  // namespace scourbook::store
