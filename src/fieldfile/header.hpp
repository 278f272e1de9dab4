#pragma once
// The header line: which kind of file it is, which column stands where and in which unit.

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "fieldfile/columns.hpp"
#include "fieldfile/csv.hpp"

namespace scourbook::fieldfile {

struct HeaderCell {
  std::string name;        ///< as written, with its unit
  std::size_t column = 0;  ///< index in columns_of(kind).columns
  std::optional<Unit> unit;
};

struct Header {
  Kind kind = Kind::stage;
  std::string line;               ///< as written
  std::vector<HeaderCell> cells;  ///< in the order of the file

  /// Cell of the column of this name (without unit), none where the file does not have it.
  [[nodiscard]] std::optional<std::size_t> find(std::string_view column) const;
};

/// Recognises the header. Nothing, and at least one finding, where it fits no kind: missing, unknown,
/// misspelt and repeated columns, units that are unknown, missing or of another measure; `correct` allows the
/// column withdrawn.
[[nodiscard]] std::optional<Header> read_header(const Record& record, bool correct, FindingSink& findings);

}  // namespace scourbook::fieldfile
