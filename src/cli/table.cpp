#include "cli/table.hpp"

#include <algorithm>
#include <cassert>
#include <sstream>

#include "terms/finding.hpp"

namespace scourbook::cli {

Table::Table(std::vector<Column> columns) : columns_(std::move(columns)) {}

void Table::add(std::vector<std::string> row) {
  assert(row.size() == columns_.size());
  rows_.push_back(std::move(row));
}

std::string Table::text(std::size_t indent) const {
  std::vector<std::size_t> widths;
  for (const Column& column : columns_) widths.push_back(count_characters(column.title));
  for (const auto& row : rows_) {
    for (std::size_t i = 0; i < row.size(); ++i) widths[i] = std::max(widths[i], count_characters(row[i]));
  }
  std::string out;
  const auto line = [&](const auto& cell) {
    std::string text(indent, ' ');
    for (std::size_t i = 0; i < columns_.size(); ++i) {
      const std::string fill(widths[i] - count_characters(cell(i)), ' ');
      text += columns_[i].align == Align::right ? fill + cell(i) : cell(i) + fill;
      text += "  ";
    }
    text.erase(text.find_last_not_of(' ') + 1);
    out += text + "\n";
  };
  line([&](std::size_t i) { return columns_[i].title; });
  for (const auto& row : rows_) line([&](std::size_t i) { return row[i]; });
  return out;
}

std::string wrapped(const std::string& text, std::size_t indent, std::size_t width) {
  std::istringstream words(text);
  std::string out, line(indent, ' ');
  bool first = true;
  for (std::string word; words >> word;) {
    if (!first && count_characters(line) + 1 + count_characters(word) > width) {
      out += line + "\n";
      line.assign(indent, ' ');
      first = true;
    }
    if (!first) line += ' ';
    line += word;
    first = false;
  }
  return first ? out : out + line + "\n";
}

}  // namespace scourbook::cli
