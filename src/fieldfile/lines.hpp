#pragma once
// Lines of a text file, one at a time, in bounded memory.

#include <cstddef>
#include <string_view>
#include <vector>

#include "fieldfile/bytes.hpp"

namespace scourbook::fieldfile {

/// What a reader keeps in memory at most.
struct Limits {
  std::size_t longest_line = std::size_t{1} << 20;  ///< bytes of a line; more is a fault of the file
  std::size_t longest_record = std::size_t{1}
                               << 20;  ///< bytes of a record, which quotes may spread over lines
  std::size_t most_findings = 10'000;  ///< kept per file; the rest is counted
};

/// Splits bytes at LF or CRLF, drops a UTF-8 byte order mark at the start. Holds one block and one line.
class LineReader {
 public:
  enum class Status { line, end, too_long, fault };

  LineReader(ByteSource& source, const Limits& limits);
  /// The next line without its end; the view is good until the next call. After anything but `line` there is
  /// nothing more.
  [[nodiscard]] Status next(std::string_view& line);
  /// Number of the line that next() gave last (or that was too long), from 1.
  [[nodiscard]] std::size_t number() const { return number_; }
  [[nodiscard]] const ByteFault& fault() const { return source_.fault(); }

 private:
  [[nodiscard]] bool fill();  ///< more bytes behind those held; false at the end

  ByteSource& source_;
  Limits limits_;
  std::vector<char> buffer_;
  std::size_t begin_ = 0;  // of what is not yet handed out
  std::size_t end_ = 0;
  std::size_t number_ = 0;
};

}  // namespace scourbook::fieldfile
