#include "fieldfile/header.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "terms/nearest.hpp"

namespace scourbook::fieldfile {
namespace {

enum class Match { good, no_unit, unknown_unit, other_measure, misspelt, none };

/// How one name of the header fits a kind.
struct CellMatch {
  Match match = Match::none;
  std::size_t column = 0;
  std::optional<Unit> unit;
  std::string meant;  // the nearest name of a misspelt one
};

/// How the whole header fits a kind.
struct Fit {
  const KindOfFile* kind = nullptr;
  std::vector<CellMatch> cells;
  std::vector<std::size_t> lacking;  // required columns that no cell stands for
  int matched = 0;                   // columns that some cell stands for
  int score = 0;
};

std::optional<std::size_t> find_column(const KindOfFile& kind, std::string_view name) {
  for (std::size_t i = 0; i < kind.columns.size(); ++i) {
    if (kind.columns[i].name == name) return i;
  }
  return {};
}

/// A name by its letters alone; misspellings are looked for later.
CellMatch match_cell(const KindOfFile& kind, std::string_view name) {
  if (const auto whole = find_column(kind, name)) {
    const bool wants_unit = kind.columns[*whole].measure != Measure::none;
    return {wants_unit ? Match::no_unit : Match::good, *whole, {}, {}};
  }
  const std::size_t cut = name.rfind('_');
  if (cut == std::string_view::npos) return {};
  const auto column = find_column(kind, name.substr(0, cut));
  if (!column || kind.columns[*column].measure == Measure::none) return {};
  const auto unit = find_unit(name.substr(cut + 1));
  if (!unit) return {Match::unknown_unit, *column, {}, {}};
  const bool fits = unit->measure == kind.columns[*column].measure;
  return {fits ? Match::good : Match::other_measure, *column, unit, {}};
}

/// The names that a misspelt one may have meant: those of columns that no cell stands for yet.
std::vector<std::string> free_names(const KindOfFile& kind, const std::vector<bool>& taken) {
  std::vector<std::string> names;
  for (std::size_t i = 0; i < kind.columns.size(); ++i) {
    const Column& column = kind.columns[i];
    if (taken[i]) continue;
    if (column.measure == Measure::none) names.emplace_back(column.name);
    for (const Unit& unit : units()) {
      if (column.measure == Measure::none || unit.measure != column.measure) continue;
      names.push_back(fmt::format("{}_{}", column.name, unit.suffix));
    }
  }
  return names;
}

void match_misspelt(const KindOfFile& kind, std::string_view name, std::vector<bool>& taken,
                    CellMatch& cell) {
  cell.meant = nearest_word(name, free_names(kind, taken));
  if (cell.meant.empty()) return;
  cell.match = Match::misspelt;
  cell.column = match_cell(kind, cell.meant).column;
  taken[cell.column] = true;
}

Fit fit_kind(const KindOfFile& kind, const Record& record) {
  Fit fit;
  fit.kind = &kind;
  std::vector<bool> taken(kind.columns.size(), false);
  for (const Field& field : record.fields) {
    fit.cells.push_back(match_cell(kind, field.text));
    if (fit.cells.back().match != Match::none) taken[fit.cells.back().column] = true;
  }
  for (std::size_t i = 0; i < fit.cells.size(); ++i) {
    if (fit.cells[i].match != Match::none) continue;
    match_misspelt(kind, record.fields[i].text, taken, fit.cells[i]);
    if (fit.cells[i].match == Match::none) --fit.score;
  }
  for (std::size_t i = 0; i < kind.columns.size(); ++i) {
    const int weight = kind.columns[i].required ? 2 : 1;
    if (taken[i]) {
      fit.score += weight;
      ++fit.matched;
    } else if (kind.columns[i].required) {
      fit.score -= weight;
      fit.lacking.push_back(i);
    }
  }
  return fit;
}

Fit nearest_kind(const Record& record) {
  Fit best;
  for (const KindOfFile& kind : kinds()) {
    Fit fit = fit_kind(kind, record);
    if (best.kind == nullptr || fit.score > best.score) best = std::move(fit);
  }
  return best;
}

std::string all_kinds() {
  std::string list;
  for (const KindOfFile& kind : kinds()) list.append(list.empty() ? "" : ", ").append(kind.name);
  return list;
}

/// A first line without one known column: another separator, or no field data at all.
void report_no_table(const Record& record, FindingSink& findings) {
  Finding finding = record.whole();
  const std::string_view line = record.raw;
  const bool one_field = record.fields.size() == 1;
  const bool semicolons = one_field && line.find(';') != std::string_view::npos;
  const bool tabs = one_field && line.find('\t') != std::string_view::npos;
  if (semicolons || tabs) {
    finding.fault = fmt::format("the fields are parted by {}", semicolons ? "semicolons" : "tabs");
    finding.expected = "fields parted by commas (CSV, RFC 4180)";
    finding.remedy = "export the table as CSV with commas, numbers with a decimal point";
  } else {
    finding.fault = "is text that is no table of field data: its first line names no known column";
    finding.expected = "a header line of one of these kinds: " + all_kinds();
  }
  findings.add(std::move(finding));
}

void report_lacking(const Record& record, const Fit& fit, FindingSink& findings) {
  std::string names;
  for (const std::size_t i : fit.lacking) {
    names.append(names.empty() ? "" : ", ").append(si_name(fit.kind->columns[i]));
  }
  Finding finding = record.whole();
  finding.fault =
      fmt::format("the header fits no kind of file; the nearest, {}, lacks {}", fit.kind->name, names);
  finding.expected = fmt::format("{}: {}", fit.kind->name, list_columns(*fit.kind));
  finding.remedy = fit.lacking.size() == 1 ? "add the column" : "add the columns";
  findings.add(std::move(finding));
}

void report_cell(const Record& record, const Fit& fit, std::size_t i, FindingSink& findings) {
  const Field& field = record.fields[i];
  const CellMatch& cell = fit.cells[i];
  const Column& column = fit.kind->columns[cell.column];
  Finding finding = record.at(field);
  switch (cell.match) {
    case Match::good:
      return;
    case Match::no_unit:
      finding.fault = fmt::format("{}: no unit", field.text);
      finding.expected = "the unit at the end of the name";
      finding.remedy = "write " + names_of(column);
      break;
    case Match::unknown_unit:
      finding.fault = fmt::format("{}: unit not known", field.text);
      finding.expected = "a name that ends in one of _m, _ft, _m3s, _ft3s, _m2, _ft2, _ms, _fts";
      finding.remedy = "write " + names_of(column);
      break;
    case Match::other_measure:
      finding.fault = fmt::format("{}: {} is no unit of {}", field.text, cell.unit->suffix, column.name);
      finding.expected = names_of(column);
      finding.remedy = "write " + names_of(column);
      break;
    case Match::misspelt:
      finding.fault = fmt::format("{} is no column of a {} file", in_quotes(field.text), fit.kind->name);
      finding.expected = list_columns(*fit.kind);
      finding.remedy = fmt::format("write {} if that is meant", cell.meant);
      break;
    case Match::none:
      finding.fault = field.text.empty() ? fmt::format("column {} has no name", i + 1)
                                         : fmt::format("{} is no column of a {} file", in_quotes(field.text),
                                                       fit.kind->name);
      finding.expected = list_columns(*fit.kind);
      finding.remedy = "take the column out, or give it its right name";
      break;
  }
  findings.add(std::move(finding));
}

void report_repeated(const Record& record, const Fit& fit, FindingSink& findings) {
  for (std::size_t i = 0; i < fit.cells.size(); ++i) {
    for (std::size_t j = 0; j < i; ++j) {
      const bool both = fit.cells[i].match != Match::none && fit.cells[j].match != Match::none;
      if (!both || fit.cells[i].column != fit.cells[j].column) continue;
      Finding finding = record.at(record.fields[i]);
      finding.fault = fmt::format("{} gives {} a second time, after {}", record.fields[i].text,
                                  fit.kind->columns[fit.cells[i].column].name, record.fields[j].text);
      finding.expected = "each column once, in one unit";
      finding.remedy = "take one of them out";
      findings.add(std::move(finding));
      break;
    }
  }
}

void report_withdrawn(const Record& record, const Header& header, FindingSink& findings) {
  const auto cell = header.find("withdrawn");
  if (!cell) return;
  Finding finding = record.at(record.fields[*cell]);
  finding.fault = "withdrawn is a column of corrections only";
  finding.expected = "a file without it, or a correction";
  finding.remedy = "take the file in with --correct --reason TEXT";
  findings.add(std::move(finding));
}

}  // namespace

std::optional<std::size_t> Header::find(std::string_view column) const {
  const auto& columns = columns_of(kind).columns;
  for (std::size_t i = 0; i < cells.size(); ++i) {
    if (columns[cells[i].column].name == column) return i;
  }
  return {};
}

std::optional<Header> read_header(const Record& record, bool correct, FindingSink& findings) {
  const Fit fit = nearest_kind(record);
  if (fit.matched == 0) {
    report_no_table(record, findings);
    return {};
  }
  if (!fit.lacking.empty()) report_lacking(record, fit, findings);
  for (std::size_t i = 0; i < fit.cells.size(); ++i) report_cell(record, fit, i, findings);
  report_repeated(record, fit, findings);
  if (!findings.empty()) return {};

  Header header;
  header.kind = fit.kind->kind;
  header.line = std::string(record.raw);
  for (std::size_t i = 0; i < fit.cells.size(); ++i) {
    header.cells.push_back({std::string(record.fields[i].text), fit.cells[i].column, fit.cells[i].unit});
  }
  if (!correct) report_withdrawn(record, header, findings);
  return findings.empty() ? std::optional(std::move(header)) : std::nullopt;
}

}  // namespace scourbook::fieldfile
