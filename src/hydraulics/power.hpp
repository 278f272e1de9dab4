#pragma once
// exp2, log2 and x^y with the same bits on every IEEE machine: + - x / and integers only, compiled with
// -ffp-contract=off. Relative error below 3e-16 (at most one unit in the last place beside the correctly
// rounded value), where the result is a normal number. What overflows gives infinity, what underflows 0 or a
// subnormal. For loops over many values see power_kernel.hpp.

namespace scourbook::hydraulics {

/// x^y for x >= 0. 0^y is 0 for y > 0, infinity for y < 0; x^0 is 1.
[[nodiscard]] double reproducible_pow(double x, double y);
[[nodiscard]] double reproducible_exp2(double x);
[[nodiscard]] double reproducible_log2(double x);  ///< x > 0, finite
[[nodiscard]] double reproducible_exp(double x);
[[nodiscard]] double reproducible_log(double x);  ///< x > 0, finite

}  // namespace scourbook::hydraulics
