#pragma once
// The arithmetic of x^y, inline and without branches, so that a loop over many values can be turned into
// vector code that gives the same bits as one call. Callers outside the hot loops use power.hpp.
//
// Only + - x / on binary64 (round to nearest) and bit operations, shifts and sums of 64-bit integers. Built
// with -ffp-contract=off. Extra precision comes from pairs whose leading number keeps 26 significant bits: a
// product of two such numbers is exact (the splitting of Dekker, Numer. Math. 18 (1971) 224-242, by cutting
// off bits). The polynomials interpolate at Chebyshev points; they were computed with 60 digits, and the
// bounds given are those of the rounded coefficients.

#include <bit>
#include <cfloat>
#include <cstdint>
#include <limits>

namespace scourbook::hydraulics::kernel {

static_assert(std::numeric_limits<double>::is_iec559 && FLT_EVAL_METHOD == 0,
              "needs plain binary64 arithmetic");

/// An unevaluated sum: `lead` with at most 26 significant bits, `rest` below 2^-25 of it.
struct Pair {
  double lead, rest;
};

/// a with the last 27 bits of its significand cut off.
inline double leading(double a) {
  return std::bit_cast<double>(std::bit_cast<std::uint64_t>(a) & 0xfffffffff8000000);
}

/// a b for a pair a; the first number holds 52 bits at most, the sum of both is good to about 2^-75 of it.
struct Product {
  double high, low;
};
inline Product product(double y, Pair a) {
  const double y_lead = leading(y);
  return {y_lead * a.lead, (y - y_lead) * a.lead + y * a.rest};
}

/// log2 x for a normal x > 0, good to about 2^-63 of |log2 x|, also where x is next to 1.
///   x = 2^k m, m in [sqrt(1/2), sqrt(2));  s = (m - 1) / (m + 1), u = s^2
///   log2 m = (2 / ln 2) atanh(s) = 2 / (3 ln 2) s (3 + u + u^2 q(u))
inline Pair log2_pair(double x) {
  constexpr std::uint64_t kOne = 0x3ff0000000000000, kRootHalf = 0x3fe6a09e667f3bcd;
  constexpr double kTwoTo52 = 4503599627370496.0;
  const std::uint64_t shifted = std::bit_cast<std::uint64_t>(x) + (kOne - kRootHalf);
  const std::uint64_t biased = shifted >> 52;  // k + 1023
  // The integer goes to double through the mantissa of 2^52: the same in scalar and vector code.
  const double k = std::bit_cast<double>(biased | 0x4330000000000000) - (kTwoTo52 + 1023.0);
  const double m = std::bit_cast<double>(std::bit_cast<std::uint64_t>(x) - (biased << 52) + kOne);

  // s: the leading bits of the quotient, then the exact remainder over the divisor
  const double numerator = m - 1.0;  // exact
  const double inverse = 1.0 / (m + 1.0);
  const double s = numerator * inverse;
  const double s_lead = leading(s);
  const double divisor_lead = leading(m + 1.0);
  const double divisor_rest = m - (divisor_lead - 1.0);
  const double s_rest = ((numerator - s_lead * divisor_lead) - s_lead * divisor_rest) * inverse;

  // q(u); its error is below 6e-20 in log2 m
  const double u = s * s, v = u * u;
  const double even = 0x1.3333333333337p-1 +
                      v * (0x1.55555561ec58cp-2 + v * (0x1.d8a514cd28358p-3 + v * 0x1.8cb3dd8a12e92p-3));
  const double odd = 0x1.b6db6db6d57d9p-2 + v * (0x1.1745c7755e286p-2 + v * 0x1.982519207348dp-3);

  // 3 + u + u^2 q, u itself from the exact square of s_lead
  const double square = s_lead * s_lead;
  const double small = s_rest * (s_lead + s) + v * (even + u * odd);
  const double sum_lead = leading(3.0 + square + small);
  const double sum_rest = small - ((sum_lead - 3.0) - square);

  // times s, then times 2 / (3 ln 2)
  constexpr double kFactor = 0x1.ec709dc3a03fdp-1, kFactorLead = 0x1.ec709d8000000p-1,
                   kFactorRest = 0x1.0e80ff5d27f05p-27;
  const double high = s_lead * sum_lead;
  const double low = s_rest * sum_lead + s * sum_rest;
  const double product_lead = leading(high + low);
  const double product_rest = low - (product_lead - high);
  const double z_high = kFactorLead * product_lead;
  const double z_low = kFactorRest * product_lead + kFactor * product_rest;

  const double lead = leading((z_high + z_low) + k);
  return {lead, z_low - ((lead - k) - z_high)};
}

/// 2^(high + low) for |high| < 1022; the polynomial's own relative error is below 3e-17.
inline double exp2_sum(Product p) {
  constexpr double kToInteger = 6755399441055744.0;  // 1.5 x 2^52: adding it rounds to a whole number
  const double shifted = p.high + kToInteger;
  const double whole = shifted - kToInteger;
  const double r = (p.high - whole) + p.low;  // |r| <= 1/2 but for the size of low
  const double v = r * r;
  // (2^r - 1) / r
  const double even =
      0x1.62e42fefa39efp-1 +
      v * (0x1.c6b08d704a0c2p-5 +
           v * (0x1.5d87fe78a5276p-10 +
                v * (0x1.ffcbfc670dcd4p-17 + v * (0x1.b524fae627834p-24 + v * 0x1.e9d3fe395219ap-32))));
  const double odd =
      0x1.ebfbdff82c598p-3 +
      v * (0x1.3b2ab6fba1ddap-7 +
           v * (0x1.430913096fd9fp-13 + v * (0x1.62bfd47773353p-20 + v * 0x1.e6063f7217bedp-28)));
  const double mantissa = 1.0 + r * (even + r * odd);
  // 2^whole: the whole number stands in the low bits of `shifted`
  const double scale =
      std::bit_cast<double>((std::bit_cast<std::uint64_t>(shifted) << 52) + 0x3ff0000000000000);
  return mantissa * scale;
}

/// x^y for a normal x > 0 and |y log2 x| < 1000: bit for bit what reproducible_pow gives there.
inline double pow_normal(double x, double y) {
  return exp2_sum(product(y, log2_pair(x)));
}

}  // namespace scourbook::hydraulics::kernel
