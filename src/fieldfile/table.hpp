#pragma once
// A field file as a table: its header, then rows whose cells are read by column and by rule.

#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "fieldfile/header.hpp"
#include "terms/time.hpp"

namespace scourbook::fieldfile {

/// A station that rows may name: held by the book or described in the same take.
struct KnownStation {
  std::optional<UtcOffset>
      offset;  ///< none where its own row is faulty: times are then checked but not placed
};
using KnownStations = std::map<std::string, KnownStation, std::less<>>;

/// What a number may be, in SI (percent and pure numbers as they stand), and the words for it.
struct Range {
  double least;
  double most;
  bool least_too;        ///< false: over `least`, not equal to it
  const char* expected;  ///< "0 or more"
};

/// A word list with its words, for messages.
using Words = std::vector<std::string>;

/// One row. Reading a cell that breaks its rule adds a finding and gives nothing; ok() then turns false.
class Row {
 public:
  [[nodiscard]] bool ok() const { return ok_; }
  [[nodiscard]] std::size_t line() const { return record_.line; }

  /// Text of the cell, empty where the file has no such column or the cell is blank.
  [[nodiscard]] std::string_view text(std::string_view column) const;
  [[nodiscard]] bool blank(std::string_view column) const { return text(column).empty(); }
  /// A required name: 1 to 64 characters, none of them a control character, a comma or a quote, the first no
  /// #.
  [[nodiscard]] std::string name(std::string_view column);
  /// The same, `otherwise` where it is blank.
  [[nodiscard]] std::string name_or(std::string_view column, const std::string& otherwise);
  /// The station of the row; a finding (one for all rows that name it) where nobody knows it.
  [[nodiscard]] std::string station(const KnownStations& known);
  /// A number in SI; nothing where the cell is blank, which is a finding in a column that must be filled.
  [[nodiscard]] std::optional<double> number(std::string_view column, const Range& range, bool must = false);
  /// A time, in the offset of the row's station unless it has its own.
  [[nodiscard]] std::optional<Instant> time(std::string_view column, const KnownStations& known,
                                            bool must = true);
  /// One of `words`, by its place in them; nothing where blank.
  [[nodiscard]] std::optional<std::size_t> word(std::string_view column, const Words& words, bool must);
  /// True where the file says withdrawn = yes.
  [[nodiscard]] bool withdrawn();

  /// Adds a finding at the cell of `column`, at the line's end where the file has no such column.
  void fault(std::string_view column, std::string fault, std::string expected, std::string remedy = {});
  /// The same, once for all rows of `group`.
  void fault_once(const std::string& group, std::string_view column, std::string fault, std::string expected,
                  std::string remedy);
  /// Place of the cell: a finding without words, to be filled in later.
  [[nodiscard]] Finding place(std::string_view column) const;
  /// The column's name as this file writes it, with its unit.
  [[nodiscard]] std::string_view title(std::string_view column) const;
  [[nodiscard]] const Unit& unit(std::string_view column) const;

 private:
  friend class Table;
  void fault_of_time(std::string_view column, TimeFault fault);
  void missing(std::string_view column, std::string expected);

  const Header* header_ = nullptr;
  FindingSink* findings_ = nullptr;
  Record record_;
  bool ok_ = true;
};

/// Reads header and rows of one file.
class Table {
 public:
  Table(ByteSource& source, FindingSink& findings, const Limits& limits, bool correct);

  /// The header; nothing, with findings, where it cannot be used. A file without any line, or with a header
  /// only, is a finding as well.
  [[nodiscard]] const std::optional<Header>& header() const { return header_; }
  /// The next row with as many fields as the header; false at the end.
  [[nodiscard]] bool next(Row& row);
  /// Data lines seen so far.
  [[nodiscard]] std::int64_t rows() const { return rows_; }

  /// For the short way of stage files: the next line as it stands, and the row that begins with it.
  [[nodiscard]] bool next_line(std::string_view& line);
  [[nodiscard]] bool row_of(std::string_view line, Row& row);
  [[nodiscard]] std::size_t line_number() const { return reader_.line_number(); }
  void count_row() { ++rows_; }

  [[nodiscard]] FindingSink& findings() { return findings_; }

 private:
  [[nodiscard]] bool fits(Row& row);
  void report_empty();

  FindingSink& findings_;
  CsvReader reader_;
  std::optional<Header> header_;
  std::size_t header_line_ = 0;
  std::int64_t rows_ = 0;
};

}  // namespace scourbook::fieldfile
