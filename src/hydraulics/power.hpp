#pragma once
// exp2, log2 and x^y with the same bits on every IEEE machine.

namespace scourbook::hydraulics {

/// x^y for x >= 0 and finite y, |y log2 x| < 1000: range-reduced polynomials in + - x / only, compiled with
/// -ffp-contract=off. Relative error below 2e-15 (aim 7e-16) against a correctly rounded reference. 0^y = 0 for y > 0.
[[nodiscard]] double reproducible_pow(double x, double y);
[[nodiscard]] double reproducible_exp2(double x);  ///< |x| < 1022
[[nodiscard]] double reproducible_log2(double x);  ///< x > 0, normal
[[nodiscard]] double reproducible_exp(double x);   ///< exp2(x log2 e), |x| < 700
[[nodiscard]] double reproducible_log(double x);

}  // namespace scourbook::hydraulics
