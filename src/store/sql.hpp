#pragma once
// Statements with typed columns, and SQLite's errors as the store's own.

#include <SQLiteCpp/SQLiteCpp.h>

#include <cstdint>
#include <optional>
#include <string>
#include <utility>

#include "store/error.hpp"

namespace scourbook::store {

/// What an SQLite error means for the one who asked.
[[nodiscard]] StoreError translated(const SQLite::Exception& error);

/// Runs `work`; SQLite's exceptions leave as StoreError.
template <class Work>
auto guarded(Work work) -> decltype(work()) {
  try {
    return work();
  } catch (const SQLite::Exception& error) {
    throw translated(error);
  }
}

/// What a stored word means; throws damaged where it means nothing.
template <class Value>
[[nodiscard]] Value known(const std::optional<Value>& parsed, const char* what) {
  if (!parsed) {
    throw StoreError(StoreError::Kind::damaged,
                     std::string("the book holds an unknown ") + what + "; scourbook check names the row");
  }
  return *parsed;
}

/// One statement: values bound in order, then rows read by column number from 0.
class Query {
 public:
  Query(const SQLite::Database& db, const std::string& sql) : statement_(db, sql) {}

  Query& put(std::int64_t value) { return statement_.bind(next_++, value), *this; }
  Query& put(int value) { return put(static_cast<std::int64_t>(value)); }
  Query& put(bool value) { return put(static_cast<std::int64_t>(value)); }
  /// Throws refused for NaN and infinity, naming the column: they never enter a book. Zero has no sign in it.
  Query& put(double value);
  /// Throws refused where it is not UTF-8 or holds a NUL: other tools would read another text.
  Query& put(const std::string& value);
  Query& put(std::string_view value) { return put(std::string(value)); }
  Query& put(const char* value) { return put(std::string(value)); }
  Query& put(const std::optional<std::int64_t>& value);
  Query& put(const std::optional<int>& value);
  Query& put(const std::optional<double>& value);
  Query& put(const std::optional<std::string>& value);
  template <class First, class... Rest>
  Query& put(const First& first, const Rest&... rest) {
    put(first);
    if constexpr (sizeof...(rest) > 0) put(rest...);
    return *this;
  }

  [[nodiscard]] bool next() { return statement_.executeStep(); }
  void run() { statement_.exec(); }
  /// Ready to be bound and run again.
  void again() {
    statement_.reset();
    statement_.clearBindings();
    next_ = 1;
  }

  [[nodiscard]] bool null(int column) { return statement_.getColumn(column).isNull(); }
  [[nodiscard]] std::int64_t integer(int column) { return statement_.getColumn(column).getInt64(); }
  [[nodiscard]] int small(int column) { return static_cast<int>(integer(column)); }
  [[nodiscard]] double real(int column) { return statement_.getColumn(column).getDouble(); }
  [[nodiscard]] std::string text(int column) { return statement_.getColumn(column).getString(); }
  [[nodiscard]] std::optional<std::int64_t> maybe_integer(int column) {
    return null(column) ? std::nullopt : std::optional(integer(column));
  }
  [[nodiscard]] std::optional<double> maybe_real(int column) {
    return null(column) ? std::nullopt : std::optional(real(column));
  }
  [[nodiscard]] SQLite::Statement& statement() { return statement_; }

 private:
  Query& put_null();
  /// "curve.level_m": what the next value goes into.
  [[nodiscard]] std::string target() const;

  SQLite::Statement statement_;
  int next_ = 1;
};

/// The columns of a row one after another.
class Columns {
 public:
  explicit Columns(Query& query, int first = 0) : query_(query), at_(first) {}
  [[nodiscard]] std::int64_t integer() { return query_.integer(at_++); }
  [[nodiscard]] int small() { return query_.small(at_++); }
  [[nodiscard]] bool flag() { return query_.integer(at_++) != 0; }
  [[nodiscard]] double real() { return query_.real(at_++); }
  [[nodiscard]] std::string text() { return query_.text(at_++); }
  [[nodiscard]] std::optional<std::int64_t> maybe_integer() { return query_.maybe_integer(at_++); }
  [[nodiscard]] std::optional<int> maybe_small() {
    const auto value = maybe_integer();
    return value ? std::optional(static_cast<int>(*value)) : std::nullopt;
  }
  [[nodiscard]] std::optional<double> maybe_real() { return query_.maybe_real(at_++); }

 private:
  Query& query_;
  int at_;
};

}  // namespace scourbook::store
