#include "fieldfile/number.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

namespace scourbook::fieldfile {
namespace {

constexpr int kMostDigits = 18;

/// True where the whole text is one number.
bool whole_number(std::string_view text, ParsedNumber& parsed) {
  if (!text.empty() && text.front() == '+') text.remove_prefix(1);
  if (text.empty() || text.front() == '+') return false;
  const char* end = text.data() + text.size();
  const auto [stop, error] = std::from_chars(text.data(), end, parsed.value);
  if (stop != end || error == std::errc::invalid_argument) return false;
  if (error == std::errc::result_out_of_range || !std::isfinite(parsed.value)) {
    parsed.fault = NumberFault::not_finite;
  }
  return true;
}

}  // namespace

ParsedNumber parse_number(std::string_view text) {
  ParsedNumber parsed;
  if (whole_number(text, parsed)) return parsed;
  if (std::count(text.begin(), text.end(), ',') == 1) {
    std::string with_point(text);
    std::replace(with_point.begin(), with_point.end(), ',', '.');
    ParsedNumber other;
    if (whole_number(with_point, other)) return {0, NumberFault::decimal_comma};
  }
  return {0, NumberFault::not_a_number};
}

bool parse_decimal(std::string_view text, std::int64_t& value, int& decimals) {
  std::size_t at = 0;
  const bool negative = !text.empty() && text[0] == '-';
  if (negative || (!text.empty() && text[0] == '+')) ++at;
  std::int64_t whole = 0;
  int digits = 0;
  int behind = -1;  // digits behind the point, -1 before it
  for (; at < text.size(); ++at) {
    const char c = text[at];
    if (c == '.' && behind < 0) {
      behind = 0;
    } else if (c >= '0' && c <= '9' && digits < kMostDigits) {
      whole = whole * 10 + (c - '0');
      ++digits;
      if (behind >= 0) ++behind;
    } else {
      return false;
    }
  }
  if (digits == 0 || behind == 0) return false;
  value = negative ? -whole : whole;
  decimals = std::max(behind, 0);
  return true;
}

std::string remedy_of(NumberFault fault, std::string_view text, bool may_be_blank) {
  if (fault == NumberFault::none) return {};
  if (fault == NumberFault::decimal_comma) {
    std::string with_point(text);
    std::replace(with_point.begin(), with_point.end(), ',', '.');
    return "write " + with_point;
  }
  std::string way = "write the number alone, without unit or words";
  if (may_be_blank) way += ", or leave the field blank where there is none";
  return way;
}

std::string_view explain(NumberFault fault) {
  return fault == NumberFault::not_finite ? "is not a finite number" : "is not a number";
}

}  // namespace scourbook::fieldfile
