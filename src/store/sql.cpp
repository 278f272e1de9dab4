#include "store/sql.hpp"

#include <sqlite3.h>

#include <cmath>

#include "terms/finding.hpp"

namespace scourbook::store {

std::string Query::target() const {
  // Our own text: "INSERT INTO table (a, b, c) VALUES ...".
  const std::string sql = statement_.getQuery();
  const std::string into = "INSERT INTO ";
  const auto open = sql.find(" ("), close = sql.find(')');
  if (sql.rfind(into, 0) != 0 || open > close) return "parameter " + std::to_string(next_);
  const std::string table = sql.substr(into.size(), open - into.size());
  std::size_t from = open + 2;
  for (int i = 1; i < next_; ++i) from = sql.find(", ", from) + 2;
  return table + "." + sql.substr(from, sql.find_first_of(",)", from) - from);
}

Query& Query::put(double value) {
  if (!std::isfinite(value)) {
    throw StoreError(StoreError::Kind::refused,
                     target() + " is " + std::to_string(value) + ", which is no figure; nothing was stored");
  }
  // SQLite does not keep the sign of a negative zero; adding zero takes it off here already.
  statement_.bind(next_++, value + 0.0);
  return *this;
}

Query& Query::put(const std::string& value) {
  if (!is_utf8(value) || value.find('\0') != std::string::npos) {
    throw StoreError(StoreError::Kind::refused,
                     target() + " is a text that is not UTF-8, or holds a NUL; nothing was stored");
  }
  statement_.bind(next_++, value);
  return *this;
}

Query& Query::put_null() {
  statement_.bind(next_++);
  return *this;
}

Query& Query::put(const std::optional<std::int64_t>& value) {
  return value ? put(*value) : put_null();
}
Query& Query::put(const std::optional<int>& value) {
  return value ? put(*value) : put_null();
}
Query& Query::put(const std::optional<double>& value) {
  return value ? put(*value) : put_null();
}
Query& Query::put(const std::optional<std::string>& value) {
  return value ? put(*value) : put_null();
}

StoreError translated(const SQLite::Exception& error) {
  using Kind = StoreError::Kind;
  const std::string said = error.what();
  switch (error.getErrorCode() & 0xff) {
    case SQLITE_BUSY:
    case SQLITE_LOCKED:
      return {Kind::busy, "another program is writing to the book; try again when it has ended"};
    case SQLITE_CORRUPT:
      return {Kind::damaged, "the book is damaged (" + said + "); keep a copy, and go back to a backup"};
    case SQLITE_NOTADB:
      return {Kind::not_a_book, "the file is no book (" + said + ")"};
    case SQLITE_READONLY:
      return {Kind::io,
              "the book cannot be written (" + said + "); look at the rights of the file and its folder"};
    case SQLITE_FULL:
      return {Kind::io, "the disk is full (" + said + "); nothing was stored"};
    case SQLITE_IOERR:
    case SQLITE_CANTOPEN:
      return {Kind::io, "the file system failed (" + said + "); nothing was stored"};
    case SQLITE_CONSTRAINT:
      return {Kind::refused, "the book refuses this: " + said};
    default:
      return {Kind::damaged, "the book cannot be read as expected: " + said};
  }
}

}  // namespace scourbook::store
