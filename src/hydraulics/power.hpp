#pragma once
// exp2, log2 and x^y with the same bits on every IEEE machine: + - x / and integers only, compiled with
// -ffp-contract=off. Relative error below 3e-16 (at most one unit in the last place beside the correctly
// rounded value), where the result is a normal number. What overflows gives infinity, what underflows 0 or a
// subnormal. For loops over many values see power_kernel.hpp.

#include <span>

namespace scourbook::hydraulics {

/// x^y for x >= 0. 0^y is 0 for y > 0, infinity for y < 0; x^0 is 1.
[[nodiscard]] double reproducible_pow(double x, double y);
/// out[i] = reproducible_pow(x[i], y), the same bits, several at once in vector code of the machine that it
/// runs on (about as fast as the library's pow one by one, faster with AVX2 or AVX-512). Sizes are equal;
/// `out` may be `x`.
void reproducible_pow(std::span<const double> x, double y, std::span<double> out);
[[nodiscard]] double reproducible_exp2(double x);
[[nodiscard]] double reproducible_log2(double x);  ///< x > 0, finite
[[nodiscard]] double reproducible_exp(double x);
[[nodiscard]] double reproducible_log(double x);  ///< x > 0, finite

}  // namespace scourbook::hydraulics
