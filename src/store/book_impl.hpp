#pragma once
// The inside of a book: one connection.

#include <SQLiteCpp/SQLiteCpp.h>

#include <string>

#include "store/book.hpp"

namespace scourbook::store {

struct Book::Impl {
  Impl(std::string where, SQLite::Database connection, bool may_write)
      : path(std::move(where)), db(std::move(connection)), writable(may_write) {}

  std::string path;
  mutable SQLite::Database db;
  bool writable;
  bool in_act = false;  ///< a Writer is open
};

/// Throws refused where `head` cannot stand in the ledger.
void require_head(const ActHead& head);

struct Writer::Impl {
  /// Inside a transaction that the writer ends.
  Impl(Book::Impl& of, ActHead given, std::int64_t act, Instant at)
      : book(of), head(std::move(given)), number(act), time(at) {
    book.in_act = true;
  }
  ~Impl();
  Impl(const Impl&) = delete;
  Impl& operator=(const Impl&) = delete;

  [[nodiscard]] SQLite::Database& db() const { return book.db; }

  Book::Impl& book;
  ActHead head;
  std::int64_t number;
  Instant time;
  bool open = true;
};

}  // namespace scourbook::store
