#include "fieldfile/csv.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <functional>

namespace scourbook::fieldfile {
namespace {

constexpr std::string_view kBlanks = " \t";

std::string_view trim(std::string_view text) {
  const std::size_t first = text.find_first_not_of(kBlanks);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(kBlanks) - first + 1);
}

bool is_blank(std::string_view line) {
  return line.find_first_not_of(kBlanks) == std::string_view::npos;
}

/// Position of the first byte that no text holds: a control character other than tab.
std::size_t find_control(std::string_view line) {
  return static_cast<std::size_t>(std::find_if(line.begin(), line.end(),
                                               [](char c) {
                                                 const auto byte = static_cast<unsigned char>(c);
                                                 return (byte < 0x20 && c != '\t') || byte == 0x7F;
                                               }) -
                                  line.begin());
}

/// Gives the record its own storage: the reader's buffer moves when another line is fetched.
void own(Record& record) {
  if (record.raw.data() == record.joined.data()) return;
  const std::string_view old = record.raw;
  for (Field& field : record.fields) {
    const std::less<const char*> before;
    const bool in_old =
        !before(field.text.data(), old.data()) && before(field.text.data(), old.data() + old.size());
    if (!in_old) continue;
    record.unquoted.emplace_back(field.text);
    field.text = record.unquoted.back();
  }
  record.joined = old;
  record.raw = record.joined;
}

Finding at_line(std::size_t line, std::string_view text) {
  Finding finding;
  finding.line = line;
  finding.column = 0;
  show_line(finding, text);
  return finding;
}

}  // namespace

Finding Record::at(std::size_t begin, std::size_t end) const {
  // The physical line that holds `begin`: quotes may have spread the record over several.
  const std::string_view before = raw.substr(0, begin);
  const std::size_t feed = before.rfind('\n');
  const std::size_t line_begin = feed == std::string_view::npos ? 0 : feed + 1;
  const std::size_t line_end = std::min(raw.find('\n', begin), raw.size());
  Finding finding;
  finding.line = line + static_cast<std::size_t>(std::count(before.begin(), before.end(), '\n'));
  finding.column = 1 + count_characters(raw.substr(line_begin, begin - line_begin));
  finding.width =
      std::max<std::size_t>(1, count_characters(raw.substr(begin, std::min(end, line_end) - begin)));
  show_line(finding, raw.substr(line_begin, line_end - line_begin));
  return finding;
}

Finding Record::whole() const {
  return at_line(line, raw.substr(0, raw.find('\n')));
}

Finding Record::behind() const {
  return at(raw.size(), raw.size());
}

CsvReader::CsvReader(ByteSource& source, FindingSink& findings, const Limits& limits)
    : lines_(source, limits), findings_(findings), limits_(limits) {}

void CsvReader::stop(Finding finding) {
  findings_.add(std::move(finding));
  stopped_ = true;
}

LineReader::Status CsvReader::advance(std::string_view& line) {
  if (stopped_) return LineReader::Status::end;
  const auto status = lines_.next(line);
  if (status == LineReader::Status::line) return status;
  stopped_ = true;
  Finding finding;
  if (status == LineReader::Status::too_long) {
    finding.line = lines_.number();
    finding.column = 0;
    finding.fault = fmt::format("the line is longer than {} bytes", limits_.longest_line);
    finding.expected = "a table: lines that end in LF or CRLF";
    findings_.add(std::move(finding));
  } else if (status == LineReader::Status::fault) {
    const ByteFault& fault = lines_.fault();
    finding.fault = fault.fault;
    finding.expected = fault.expected;
    finding.remedy = fault.remedy;
    findings_.add(std::move(finding));
  }
  return status;
}

bool CsvReader::next_line(std::string_view& line) {
  return advance(line) == LineReader::Status::line;
}

/// Says what keeps a line from being text. NUL bytes end the reading: the file is something else.
bool CsvReader::is_text(std::string_view line) {
  const std::size_t control = find_control(line);
  if (control == line.size() && is_utf8(line)) return true;
  Finding finding = at_line(lines_.number(), line);
  const bool utf16 =
      lines_.number() == 1 && (line.substr(0, 2) == "\xFF\xFE" || line.substr(0, 2) == "\xFE\xFF");
  if (utf16 || line.find('\0') != std::string_view::npos) {
    finding.fault = utf16 ? "is UTF-16 text" : "is no table: it holds NUL bytes";
    finding.expected = "a table as CSV in UTF-8";
    finding.remedy = utf16 ? "save it as CSV in UTF-8" : "export the table as CSV";
    stop(std::move(finding));
    return false;
  }
  if (!is_utf8(line)) {
    finding.fault = "holds bytes that are not UTF-8";
    finding.expected = "text in UTF-8";
    finding.remedy = "save the file as CSV in UTF-8";
  } else {
    finding.column = 1 + count_characters(line.substr(0, control));
    show_line(finding, line);
    finding.fault =
        line[control] == '\r' ? "holds a carriage return inside the line" : "holds a control character";
    finding.expected = "plain text, lines ending in LF or CRLF";
    finding.remedy = line[control] == '\r' ? "save the file with LF or CRLF line ends" : "take it out";
  }
  findings_.add(std::move(finding));
  return false;
}

/// Blank lines count only when something follows them; a comment has its place above the header.
bool CsvReader::is_stray(std::string_view line) {
  if (is_blank(line)) {
    if (blank_line_ == 0) blank_line_ = lines_.number();
    return true;
  }
  if (any_data_ && blank_line_ != 0) {
    Finding finding;
    finding.line = blank_line_;
    finding.column = 0;
    finding.fault = "blank line between records";
    finding.expected = "a record on every line; blank lines only at the end";
    finding.remedy = "take the line out";
    findings_.add(std::move(finding));
  }
  blank_line_ = 0;
  if (line.front() != '#') return false;
  if (any_data_) {
    Finding finding = at_line(lines_.number(), line);
    finding.fault = "comment line below the header";
    finding.expected = "comment lines only above the header";
    finding.remedy = "move it to the top or take it out";
    findings_.add(std::move(finding));
  }
  return true;
}

bool CsvReader::header(Record& record) {
  const bool found = next(record);
  any_data_ = found;
  return found;
}

bool CsvReader::next(Record& record) {
  std::string_view line;
  while (next_line(line)) {
    if (record_of(line, record)) return true;
    // Without a header nothing below it can be judged.
    if (!any_data_ && !findings_.empty()) return false;
  }
  return false;
}

bool CsvReader::record_of(std::string_view line, Record& record) {
  if (is_stray(line)) return false;
  record.line = lines_.number();
  record.raw = line;
  record.fields.clear();
  record.unquoted.clear();
  return is_text(line) && split(record);
}

bool CsvReader::split(Record& record) {
  std::size_t at = 0;
  while (true) {
    const std::size_t first = std::min(record.raw.find_first_not_of(kBlanks, at), record.raw.size());
    if (first < record.raw.size() && record.raw[first] == '"') {
      at = first;
      if (!quoted_field(record, at)) return false;
    } else {
      plain_field(record, at);
      const Field& field = record.fields.back();
      const std::size_t quote = field.text.find('"');
      if (quote != std::string_view::npos) {
        Finding finding = record.at(field);
        finding.fault = "a quote inside a field that is not in quotes: " + in_quotes(field.text);
        finding.expected = "the whole field in quotes, each quote in it doubled";
        findings_.add(std::move(finding));
        return false;
      }
    }
    if (at >= record.raw.size()) return true;
    ++at;  // the comma
  }
}

void CsvReader::plain_field(Record& record, std::size_t& at) {
  const std::size_t end = std::min(record.raw.find(',', at), record.raw.size());
  const std::string_view whole = record.raw.substr(at, end - at);
  const std::string_view text = trim(whole);
  const std::size_t begin = text.empty() ? at : static_cast<std::size_t>(text.data() - record.raw.data());
  record.fields.push_back({text, begin, begin + (text.empty() ? whole.size() : text.size())});
  at = end;
}

/// Reads the field whose opening quote stands at `at`; moves `at` to the comma behind it, or the end.
bool CsvReader::quoted_field(Record& record, std::size_t& at) {
  const std::size_t open = at;
  std::string text;
  std::size_t from = open + 1;
  while (true) {
    const std::size_t quote = record.raw.find('"', from);
    if (quote == std::string_view::npos) {
      text += record.raw.substr(from);
      text += '\n';
      from = record.raw.size() + 1;  // behind the LF that joins the next line
      if (!append_line(record, open)) return false;
      continue;
    }
    text += record.raw.substr(from, quote - from);
    from = quote + 1;
    if (from >= record.raw.size() || record.raw[from] != '"') break;
    text += '"';
    ++from;
  }
  const std::size_t next = std::min(record.raw.find_first_not_of(kBlanks, from), record.raw.size());
  if (next < record.raw.size() && record.raw[next] != ',') {
    Finding finding = record.at(next, std::min(record.raw.find(',', next), record.raw.size()));
    finding.fault = "text behind a closing quote";
    finding.expected = "a comma or the end of the line; a quote inside quotes is doubled";
    findings_.add(std::move(finding));
    return false;
  }
  record.unquoted.push_back(std::move(text));
  record.fields.push_back({trim(record.unquoted.back()), open, from});
  at = next;
  return true;
}

/// Joins the next line to the record whose quote at `open` is not closed yet.
bool CsvReader::append_line(Record& record, std::size_t open) {
  own(record);
  std::string_view line;
  const auto status = advance(line);
  const bool fits = record.joined.size() + 1 + line.size() <= limits_.longest_record;
  if (status == LineReader::Status::end || (status == LineReader::Status::line && !fits)) {
    Finding finding = record.at(open, open + 1);
    finding.fault = "this quote is never closed";
    finding.expected = "a closing quote behind the field";
    stop(std::move(finding));
  }
  if (status != LineReader::Status::line || !fits) return false;
  // A line that is no text is said and joined all the same: its findings keep the file out.
  if (!is_text(line) && stopped_) return false;
  record.joined += '\n';
  record.joined += line;
  record.raw = record.joined;
  return true;
}

}  // namespace scourbook::fieldfile
