#include "terms/finding.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cstdint>
#include <cstring>

namespace scourbook {
namespace {

constexpr std::size_t kLongestLine = 100;  // characters of a line that a finding shows
constexpr std::size_t kBefore = 40;        // of them, so many before the column
constexpr std::string_view kDots = "...";
constexpr std::string_view kReplacement = "\xEF\xBF\xBD";  // U+FFFD

unsigned char byte_at(std::string_view text, std::size_t at) {
  return static_cast<unsigned char>(text[at]);
}

bool continues(std::string_view text, std::size_t at) {
  return at < text.size() && (byte_at(text, at) & 0xC0) == 0x80;
}

/// Bytes of the well-formed character at `at` (RFC 3629, section 4), 0 where there is none.
std::size_t character_length(std::string_view text, std::size_t at) {
  const unsigned char b0 = byte_at(text, at);
  if (b0 < 0x80) return 1;
  if (b0 < 0xC2 || b0 > 0xF4 || !continues(text, at + 1)) return 0;
  if (b0 < 0xE0) return 2;
  const unsigned char b1 = byte_at(text, at + 1);
  if (!continues(text, at + 2)) return 0;
  if (b0 < 0xF0) {
    const bool overlong = b0 == 0xE0 && b1 < 0xA0;
    const bool surrogate = b0 == 0xED && b1 > 0x9F;
    return overlong || surrogate ? 0 : 3;
  }
  const bool overlong = b0 == 0xF0 && b1 < 0x90;
  const bool too_large = b0 == 0xF4 && b1 > 0x8F;
  return overlong || too_large || !continues(text, at + 3) ? 0 : 4;
}

bool is_control(char c) {
  return static_cast<unsigned char>(c) < 0x20 || c == 0x7F;
}

/// Characters [from, from + count) of `text` made printable; `tabs` says whether tabs stay.
std::string printable(std::string_view text, std::size_t from, std::size_t count, bool tabs) {
  std::string out;
  std::size_t character = 0;
  for (std::size_t at = 0; at < text.size() && character < from + count; ++character) {
    const std::size_t length = character_length(text, at);
    const bool keep = length > 1 || (length == 1 && (!is_control(text[at]) || (tabs && text[at] == '\t')));
    if (character >= from) out += keep ? text.substr(at, length) : kReplacement;
    at += std::max<std::size_t>(length, 1);
  }
  return out;
}

/// The window of a long line that is shown: characters [from, from + count), counted from 0.
struct Window {
  std::size_t from;
  std::size_t count;
};
Window window_around(std::size_t column, std::size_t all) {
  if (all <= kLongestLine) return {0, all};
  std::size_t from = column > kBefore ? column - kBefore - 1 : 0;
  from = std::min(from, all - kLongestLine);
  // A start that saves fewer characters than the dots take is not worth cutting.
  if (from <= kDots.size()) from = 0;
  return {from, kLongestLine};
}

/// Blanks up to the column, keeping tabs so that the caret stands under its character, then the caret and its
/// tail.
std::string caret_line(const Finding& finding) {
  const std::size_t before = finding.column - std::min(finding.column, finding.text_from);
  const std::size_t shown = count_characters(finding.text);
  std::string line;
  std::size_t at = 0;
  for (std::size_t i = 0; i < std::min(before, shown); ++i) {
    line += finding.text[at] == '\t' ? '\t' : ' ';
    at += std::max<std::size_t>(character_length(finding.text, at), 1);
  }
  line += '^';
  const std::size_t room = shown > before ? shown - before : 1;
  const std::size_t width = std::clamp<std::size_t>(finding.width, 1, room);
  line.append(width - 1, '~');
  return line;
}

}  // namespace

std::string describe(const Finding& finding) {
  std::string out = finding.file;
  if (finding.line > 0) out += fmt::format(":{}", finding.line);
  if (finding.line > 0 && finding.column > 0) out += fmt::format(":{}", finding.column);
  out += fmt::format(": {}\n", finding.fault);
  if (!finding.text.empty()) {
    out += fmt::format("    {}\n", finding.text);
    if (finding.column > 0) out += fmt::format("    {}\n", caret_line(finding));
  }
  if (!finding.expected.empty()) out += fmt::format("  expected: {}\n", finding.expected);
  if (!finding.remedy.empty()) out += fmt::format("  to do: {}\n", finding.remedy);
  return out;
}

std::string describe(const Findings& findings, std::size_t most) {
  std::string out;
  const std::size_t shown = std::min(most, findings.size());
  for (std::size_t i = 0; i < shown; ++i) out += describe(findings[i]);
  out += fmt::format("{} {} found", findings.size(), findings.size() == 1 ? "fault" : "faults");
  if (shown < findings.size()) out += fmt::format("; the first {} are shown", shown);
  return out + "\n";
}

void show_line(Finding& finding, std::string_view line) {
  const std::size_t all = count_characters(line);
  const Window window = window_around(finding.column, all);
  const bool cut_start = window.from > 0;
  const bool cut_end = window.from + window.count < all;
  // The dots stand in the place of as many characters, so that columns still count right.
  finding.text_from = window.from + 1;
  finding.text.clear();
  if (cut_start) finding.text += kDots;
  const std::size_t skip = cut_start ? kDots.size() : 0;
  finding.text += printable(line, window.from + skip, window.count - skip, true);
  if (cut_end) finding.text += kDots;
}

std::string in_quotes(std::string_view text, std::size_t most) {
  const bool cut = count_characters(text) > most;
  return fmt::format("\"{}{}\"", printable(text, 0, most, false), cut ? kDots : "");
}

std::size_t count_characters(std::string_view text) {
  std::size_t count = 0;
  for (std::size_t at = 0; at < text.size(); ++count) {
    at += std::max<std::size_t>(character_length(text, at), 1);
  }
  return count;
}

bool is_utf8(std::string_view text) {
  std::size_t at = 0;
  while (at < text.size()) {
    std::uint64_t eight = 0;
    if (at + 8 <= text.size()) {
      std::memcpy(&eight, text.data() + at, 8);
      if ((eight & 0x8080808080808080u) == 0) {
        at += 8;
        continue;
      }
    }
    const std::size_t length = character_length(text, at);
    if (length == 0) return false;
    at += length;
  }
  return true;
}

}  // namespace scourbook
