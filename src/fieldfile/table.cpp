#include "fieldfile/table.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace scourbook::fieldfile {

Table::Table(ByteSource& source, FindingSink& findings, const Limits& limits, bool correct)
    : findings_(findings), reader_(source, findings, limits) {
  Record record;
  if (reader_.header(record)) {
    header_line_ = record.line;
    header_ = read_header(record, correct, findings_);
  } else if (findings_.empty()) {
    report_empty();
  }
}

void Table::report_empty() {
  Finding finding;
  const bool no_line = reader_.line_number() <= 1;
  finding.fault = no_line ? "the file is empty" : "the file holds comments or blank lines only";
  finding.expected = "a header line and records below it";
  findings_.add(std::move(finding));
}

bool Table::next(Row& row) {
  std::string_view line;
  while (next_line(line)) {
    if (row_of(line, row)) return true;
  }
  return false;
}

bool Table::next_line(std::string_view& line) {
  if (reader_.next_line(line)) return true;
  if (header_ && rows_ == 0 && findings_.empty()) {
    Finding finding;
    finding.line = header_line_;
    finding.column = 0;
    show_line(finding, header_->line);
    finding.fault = "there is nothing below the header";
    finding.expected = "records below the header line";
    findings_.add(std::move(finding));
  }
  return false;
}

bool Table::row_of(std::string_view line, Row& row) {
  row.header_ = &*header_;
  row.findings_ = &findings_;
  row.ok_ = true;
  if (!reader_.record_of(line, row.record_)) return false;
  ++rows_;
  return fits(row);
}

bool Table::fits(Row& row) {
  const auto& fields = row.record_.fields;
  const std::size_t want = header_->cells.size();
  const bool nothing =
      std::all_of(fields.begin(), fields.end(), [](const Field& f) { return f.text.empty(); });
  Finding finding;
  if (nothing) {
    finding = row.record_.whole();
    finding.fault = "all fields are blank";
    finding.expected = header_->line;
    finding.remedy = "take the line out";
  } else if (row.record_.raw == header_->line) {
    finding = row.record_.whole();
    finding.fault = "the header line stands here again";
    finding.expected = "one header at the top";
    finding.remedy = "take the line out";
  } else if (fields.size() == want) {
    return true;
  } else {
    const bool many = fields.size() > want;
    finding = many ? row.record_.at(fields[want].begin, row.record_.raw.size()) : row.record_.behind();
    finding.fault = fmt::format("{} {} where the header has {}", fields.size(),
                                fields.size() == 1 ? "field" : "fields", want);
    finding.expected = header_->line;
    finding.remedy = many ? "write numbers with a decimal point, and put a text that holds a comma in quotes"
                          : "add what is missing; leave a field without value blank, with its comma";
  }
  findings_.add(std::move(finding));
  return false;
}

}  // namespace scourbook::fieldfile
