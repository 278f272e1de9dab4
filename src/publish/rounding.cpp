#include "publish/rounding.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "rating/evaluate.hpp"

namespace scourbook::publish {
namespace {

/// 10^n, exact for n up to 18.
std::int64_t power_of_ten(std::int64_t n) {
  std::int64_t power = 1;
  for (std::int64_t i = 0; i < n; ++i) power *= 10;
  return power;
}

/// Decimals that a figure of `digits` significant digits has, at most `most`. Negative for tens, hundreds,
/// ...
std::int64_t decimals_of(double value, std::int64_t digits, std::int64_t most) {
  std::int64_t before_point = 0;  // digits before the decimal point, negative for leading zeros after it
  for (double limit = 1; value >= limit; limit *= 10) ++before_point;
  if (before_point == 0) {
    // From above by division: 0.1, 0.01, ... are compared as value x 10^n with 1, where 10^n is exact.
    for (double scaled = value * 10; scaled < 1 && -before_point < most; scaled *= 10) --before_point;
  }
  return std::min(digits - before_point, most);
}

std::int64_t rounded(double value) {
  return static_cast<std::int64_t>(std::floor(value + 0.5));
}

}  // namespace

std::int64_t as_published(double discharge_m3s, const store::Settings& settings) {
  if (!(discharge_m3s > 0)) return 0;
  const std::int64_t most = settings.published_decimals;
  const std::int64_t decimals = decimals_of(discharge_m3s, settings.published_digits, most);
  if (decimals >= 0) {
    return rounded(discharge_m3s * static_cast<double>(power_of_ten(decimals))) *
           power_of_ten(most - decimals);
  }
  const std::int64_t ten = power_of_ten(-decimals);
  return rounded(discharge_m3s / static_cast<double>(ten)) * ten * power_of_ten(most);
}

std::string format_published(std::int64_t units, int decimals, std::int64_t digits) {
  const std::int64_t scale = power_of_ten(decimals);
  std::int64_t before_point = 0;
  for (std::int64_t whole = units / scale; whole > 0; whole /= 10) ++before_point;
  if (before_point == 0 && units > 0) {
    for (std::int64_t scaled = units * 10; scaled < scale; scaled *= 10) --before_point;
  }
  const std::int64_t shown = std::clamp<std::int64_t>(digits - before_point, 0, decimals);
  const std::int64_t kept = units / power_of_ten(decimals - shown);  // the rest is zeros
  if (shown == 0) return fmt::format("{}", kept);
  return fmt::format("{}.{:0{}}", kept / power_of_ten(shown), kept % power_of_ten(shown), shown);
}

std::int64_t u95_tenth_pct(double sd_ln_q) {
  constexpr std::int64_t kMost = 99'999;
  const double tenths = 10 * rating::u95_pct(sd_ln_q);
  return tenths >= static_cast<double>(kMost) ? kMost : rounded(tenths);
}

}  // namespace scourbook::publish
