#pragma once
// Records of a CSV file (RFC 4180): quotes, doubled quotes, line ends inside quotes; each field knows its
// place.

#include <deque>
#include <string>
#include <string_view>
#include <vector>

#include "fieldfile/lines.hpp"
#include "fieldfile/sink.hpp"

namespace scourbook::fieldfile {

/// One field: its text without quotes and outer blanks, and where it stands in its record.
struct Field {
  std::string_view text;
  std::size_t begin = 0;  ///< bytes [begin, end) of Record::raw, quotes included
  std::size_t end = 0;
};

/// One record. The views are good until the reader is asked for the next.
struct Record {
  std::size_t line = 0;  ///< of its first character, from 1
  std::string_view raw;  ///< the line, or the lines joined by LF where quotes spread it
  std::vector<Field> fields;

  /// A finding at bytes [begin, end) of raw: line, column, width and text are set, the words are empty.
  [[nodiscard]] Finding at(std::size_t begin, std::size_t end) const;
  [[nodiscard]] Finding at(const Field& field) const { return at(field.begin, field.end); }
  /// A finding about the whole record: its first line, no column.
  [[nodiscard]] Finding whole() const;
  /// A finding just behind the last character.
  [[nodiscard]] Finding behind() const;

  std::string joined;                // holds raw of a record over several lines
  std::deque<std::string> unquoted;  // holds texts that differ from their raw form
};

/// Reads records and reports what is no CSV: bytes that are no text, bad quotes, blank lines between records.
/// Such a record is skipped; where nothing sure can be said of what follows, reading stops.
class CsvReader {
 public:
  CsvReader(ByteSource& source, FindingSink& findings, const Limits& limits);

  /// The first record behind comment lines (#) and blank lines. False where there is none.
  [[nodiscard]] bool header(Record& record);
  /// The next record. False at the end.
  [[nodiscard]] bool next(Record& record);

  /// The next line as it stands, for a reader that knows a shorter way for plain lines; false at the end.
  /// Either it is used, or record_of(line) makes the record that begins with it; false where it is none (said
  /// in a finding).
  [[nodiscard]] bool next_line(std::string_view& line);
  [[nodiscard]] bool record_of(std::string_view line, Record& record);
  [[nodiscard]] std::size_t line_number() const { return lines_.number(); }

 private:
  [[nodiscard]] bool is_text(std::string_view line);
  [[nodiscard]] bool is_stray(std::string_view line);
  [[nodiscard]] bool split(Record& record);
  [[nodiscard]] bool quoted_field(Record& record, std::size_t& at);
  void plain_field(Record& record, std::size_t& at);
  [[nodiscard]] bool append_line(Record& record, std::size_t open);
  [[nodiscard]] LineReader::Status advance(std::string_view& line);
  void stop(Finding finding);

  LineReader lines_;
  FindingSink& findings_;
  Limits limits_;
  bool stopped_ = false;
  bool any_data_ = false;       // a header was read: comments and blank lines are strays now
  std::size_t blank_line_ = 0;  // first of a run of blank lines, 0 where there is none
};

}  // namespace scourbook::fieldfile
