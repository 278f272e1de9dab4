#pragma once
// A finding: one fault in a field file, with its place, the text itself, the rule and the way on.

#include <cstddef>
#include <string>
#include <vector>

namespace scourbook {

/// One fault in an input. Lines and columns count from 1; columns count characters (UTF-8 code points), not bytes;
/// line 0 speaks of the whole file.
struct Finding {
  std::string file;
  std::size_t line = 0;
  std::size_t column = 0;
  std::size_t width = 1;     ///< how many characters the caret line marks
  std::string text;          ///< the line itself, shortened around the column when it is long
  std::string fault;         ///< what is wrong: "discharge_m3s is negative: -3.2"
  std::string expected;      ///< the rule: "a number of 0 or more"
  std::string remedy;        ///< what to do, may be empty
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

}  // namespace scourbook
