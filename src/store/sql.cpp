#include "store/sql.hpp"

#include <sqlite3.h>

#include <cmath>

namespace scourbook::store {

Query& Query::put(double value) {
  if (!std::isfinite(value)) {
    throw StoreError(StoreError::Kind::refused, "a figure that is no number (" + std::to_string(value) +
                                                    ") may not enter the book: " + statement_.getQuery());
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
