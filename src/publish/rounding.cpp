#include "publish/rounding.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <utility>

#include "rating/evaluate.hpp"

namespace scourbook::publish {
namespace {

/// Decimals that a figure of `digits` significant digits has, at most `most`. Negative for tens, hundreds,
/// ...
std::int64_t decimals_of(double value, std::int64_t digits, std::int64_t most) {
  std::int64_t before_point = 0;  // digits before the decimal point, negative for leading zeros after it
  for (double limit = 1; value >= limit; limit *= 10) ++before_point;
  if (before_point == 0) {
    // By products: value x 10^n is held against 1, since 10^-n has no exact double.
    for (double scaled = value * 10; scaled < 1 && -before_point < most; scaled *= 10) --before_point;
  }
  return std::min(digits - before_point, most);
}

/// The whole number nearest to `value`, halves up; `is_below` settles a half: whether the exact figure, of
/// which `value` is the nearest double, lies under it.
template <class IsBelow>
std::int64_t nearest(double value, IsBelow is_below) {
  const double whole = std::floor(value);
  const double rest = value - whole;  // exact
  const bool up = rest > 0.5 || (rest == 0.5 && !is_below());
  return static_cast<std::int64_t>(whole) + (up ? 1 : 0);
}

/// a x b - product, exact (Dekker 1971: each factor is split into two halves of 26 bits).
double error_of_product(double a, double b, double product) {
  const auto split = [](double x) {
    const double high = 134'217'729.0 * x;  // 2^27 + 1
    const double top = high - (high - x);
    return std::pair(top, x - top);
  };
  const auto [a1, a2] = split(a);
  const auto [b1, b2] = split(b);
  return ((a1 * b1 - product) + a1 * b2 + a2 * b1) + a2 * b2;
}

}  // namespace

std::int64_t power_of_ten(std::int64_t n) {
  std::int64_t power = 1;
  for (std::int64_t i = 0; i < n; ++i) power *= 10;
  return power;
}

std::int64_t as_published(double discharge_m3s, const store::Settings& settings) {
  if (!(discharge_m3s > 0)) return 0;
  const std::int64_t most = settings.published_decimals;
  // Beyond any river, and still a whole number of 64 bits.
  if (discharge_m3s >= static_cast<double>(kMostUnits / power_of_ten(most))) return kMostUnits;
  const std::int64_t decimals = decimals_of(discharge_m3s, settings.published_digits, most);
  if (decimals >= 0) {
    const auto scale = static_cast<double>(power_of_ten(decimals));
    const double scaled = discharge_m3s * scale;
    const auto below = [&] { return error_of_product(discharge_m3s, scale, scaled) < 0; };
    return nearest(scaled, below) * power_of_ten(most - decimals);
  }
  const std::int64_t ten = power_of_ten(-decimals);
  const double scaled = discharge_m3s / static_cast<double>(ten);
  // k + 1/2 tens is a whole number of ones, so the product back is exact.
  const auto below = [&] { return discharge_m3s < scaled * static_cast<double>(ten); };
  return nearest(scaled, below) * ten * power_of_ten(most);
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
  return tenths >= static_cast<double>(kMost) ? kMost : nearest(tenths, [] { return false; });
}

}  // namespace scourbook::publish
