#pragma once
// Numbers in a field: decimal text, no locale.

#include <cstdint>
#include <string>
#include <string_view>

namespace scourbook::fieldfile {

enum class NumberFault {
  none,
  not_a_number,   ///< text, or a number with something behind it
  decimal_comma,  ///< would be a number with a point in place of its comma
  not_finite      ///< NaN, infinity, or beyond the range of a double
};

struct ParsedNumber {
  double value = 0;
  NumberFault fault = NumberFault::none;
};

/// A decimal number, exponent allowed, correctly rounded to the nearest double; a plus sign in front is
/// accepted.
[[nodiscard]] ParsedNumber parse_number(std::string_view text);

/// A plain decimal as written: value * 10^-decimals. Sign, digits, at most one point with digits behind it;
/// at most 18 digits. False for everything else.
[[nodiscard]] bool parse_decimal(std::string_view text, std::int64_t& value, int& decimals);

/// The way out of a number's fault, for a finding's "to do"; `may_be_blank`: the field may also be left
/// blank.
[[nodiscard]] std::string remedy_of(NumberFault fault, std::string_view text, bool may_be_blank);
/// "is not a number" or "is not a finite number".
[[nodiscard]] std::string_view explain(NumberFault fault);

}  // namespace scourbook::fieldfile
