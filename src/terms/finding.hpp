#pragma once
// A finding: one fault in a field file, with its place, the text itself, the rule and the way on.

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace scourbook {

/// One fault in an input. Lines and columns count from 1; columns count characters (UTF-8 code points), not bytes;
/// line 0 speaks of the whole file.
struct Finding {
  std::string file;
  std::size_t line = 0;
  std::size_t column = 0;
  std::size_t width = 1;     ///< how many characters the caret line marks
  std::string text;          ///< the line itself, shortened around the column when it is long; see show_line
  std::string fault;         ///< what is wrong: "discharge_m3s is negative: -3.2"
  std::string expected;      ///< the rule: "a number of 0 or more"
  std::string remedy;        ///< what to do, may be empty
  std::size_t text_from = 1; ///< column of the first character of `text`, over 1 where its start was cut off
};
using Findings = std::vector<Finding>;

/// The finding as people read it: place and fault, the line with a caret under the text, rule, remedy. Ends with a newline.
///   zero.csv:3:10: gauge_zero_m is not a number: "12,5"
///       TAR-1,2015-01-01T00:00Z,"12,5"
///                               ^~~~~~
///     expected: a decimal number with a point, for example 12.5
///     to do: write 12.5
[[nodiscard]] std::string describe(const Finding& finding);

/// All findings, then one line with their count. At most `most` are printed in full; the rest only counted, said so.
[[nodiscard]] std::string describe(const Findings& findings, std::size_t most = 50);

/// Puts `line` into finding.text: at most 100 characters around finding.column, dots standing for what is cut off.
/// Bytes that are not UTF-8 and control characters other than tab become U+FFFD, one character each.
void show_line(Finding& finding, std::string_view line);

/// `text` in double quotes, made printable as by show_line (tabs too), at most `most` characters of it, then dots.
[[nodiscard]] std::string in_quotes(std::string_view text, std::size_t most = 40);

/// Number of characters: UTF-8 code points, a byte that belongs to none counting as one.
[[nodiscard]] std::size_t count_characters(std::string_view text);
/// True where the bytes are well-formed UTF-8 (RFC 3629: no surrogates, no overlong forms).
[[nodiscard]] bool is_utf8(std::string_view text);

}  // namespace scourbook
