#pragma once
// Tables for people: aligned columns, one line a row.

#include <string>
#include <vector>

namespace scourbook::cli {

enum class Align { left, right };

class Table {
 public:
  struct Column {
    std::string title;
    Align align = Align::left;
  };
  explicit Table(std::vector<Column> columns);
  /// One cell a column.
  void add(std::vector<std::string> row);
  [[nodiscard]] bool empty() const { return rows_.empty(); }
  /// Header and rows, each indented by `indent` spaces; no space at the end of a line.
  [[nodiscard]] std::string text(std::size_t indent = 2) const;

 private:
  std::vector<Column> columns_;
  std::vector<std::vector<std::string>> rows_;
};

/// `text` broken at spaces into lines of at most `width` characters, each indented.
[[nodiscard]] std::string wrapped(const std::string& text, std::size_t indent = 2, std::size_t width = 100);

}  // namespace scourbook::cli
