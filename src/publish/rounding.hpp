#pragma once
// From computed flows to figures as published: whole numbers, so that they compare exactly.

#include <cstdint>
#include <string>

#include "store/book.hpp"

namespace scourbook::publish {

/// 10^n for n from 0 to 18.
[[nodiscard]] std::int64_t power_of_ten(std::int64_t n);

/// The largest figure that is given, in units; a larger flow is cut to it.
inline constexpr std::int64_t kMostUnits = 1'000'000'000'000'000'000;

/// `discharge_m3s` (finite, 0 or more) rounded to `settings.published_digits` significant digits and at most
/// `settings.published_decimals` decimals (0 to 9), halves away from zero, as a whole number of
/// 10^-published_decimals m3/s. It is the double's exact value that is rounded: 4.35, which as a double lies
/// a little below, becomes 4.3 with two digits. Only + - x / and comparisons, so the same on every machine.
[[nodiscard]] std::int64_t as_published(double discharge_m3s, const store::Settings& settings);

/// "12.3", "0.045", "1230", with the decimals that the rounding rule of `settings` gives a figure of this
/// size.
[[nodiscard]] std::string format_published(std::int64_t units, int decimals, std::int64_t digits);

/// 95 % uncertainty of a flow with this sd of ln Q in tenths of a percent, halves up; at most 99999.
[[nodiscard]] std::int64_t u95_tenth_pct(double sd_ln_q);

}  // namespace scourbook::publish
