#pragma once
// The arithmetic of x^y, inline and without branches, so that a loop over many values can be turned into
// vector code that gives the same bits as one call. Callers outside the hot loops use power.hpp.
//
// Only + - x / on binary64 (round to nearest) and shifts and sums of 64-bit integers. Built with
// -ffp-contract=off: the splittings below are exact only if no product is fused with a sum.
// Exact products and sums follow Dekker, Numer. Math. 18 (1971) 224-242. The polynomials interpolate at
// Chebyshev points; they were computed with 60 digits, and the bounds given are those of the rounded
// coefficients.

#include <bit>
#include <cfloat>
#include <cstdint>
#include <limits>

namespace scourbook::hydraulics::kernel {

static_assert(std::numeric_limits<double>::is_iec559 && FLT_EVAL_METHOD == 0,
              "needs plain binary64 arithmetic");

/// An unevaluated sum hi + lo, |lo| at most about one unit in the last place of hi.
struct Pair {
  double hi, lo;
};

/// a + b exactly; requires |a| >= |b| or a = 0.
inline Pair sum_ordered(double a, double b) {
  const double s = a + b;
  return {s, b - (s - a)};
}

/// a b exactly, for |a|, |b| < 2^990 and a product far from underflow.
inline Pair product(double a, double b) {
  constexpr double kSplit = 134217729.0;  // 2^27 + 1
  const double ca = kSplit * a, cb = kSplit * b;
  const double ah = ca - (ca - a), bh = cb - (cb - b);
  const double al = a - ah, bl = b - bh;
  const double p = a * b;
  return {p, ((ah * bh - p) + ah * bl + al * bh) + al * bl};
}

/// The product of two pairs, to about 2^-102 of it.
inline Pair product(Pair a, Pair b) {
  const Pair p = product(a.hi, b.hi);
  return sum_ordered(p.hi, p.lo + (a.hi * b.lo + a.lo * b.hi));
}

/// log2 x for a normal x > 0, hi + lo together to about 2^-62 of |log2 x|, also where x is next to 1.
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

  // s as a pair: quotient, then the exact remainder over the divisor
  const double n = m - 1.0;  // exact
  const double d = m + 1.0;
  const double d_lo = m - (d - 1.0);
  const double inverse = 1.0 / d;
  const double s_hi = n * inverse;
  const Pair back = product(s_hi, d);
  const Pair s{s_hi, ((n - back.hi) - back.lo - s_hi * d_lo) * inverse};

  // q(u); its error is below 6e-20 in log2 m
  const Pair u = product(s.hi, s.hi);
  const double v = u.hi * u.hi;
  const double even = 0x1.3333333333337p-1 +
                      v * (0x1.55555561ec58cp-2 + v * (0x1.d8a514cd28358p-3 + v * 0x1.8cb3dd8a12e92p-3));
  const double odd = 0x1.b6db6db6d57d9p-2 + v * (0x1.1745c7755e286p-2 + v * 0x1.982519207348dp-3);
  const double rest = (u.lo + 2.0 * s.hi * s.lo) + v * (even + u.hi * odd);
  const Pair head = sum_ordered(3.0, u.hi);
  const Pair sum{head.hi, head.lo + rest};

  constexpr Pair kTwoThirdsOverLn2{0x1.ec709dc3a03fdp-1, 0x1.d27f05548af0cp-55};
  const Pair log2_m = product(product(s, sum), kTwoThirdsOverLn2);
  const Pair whole = sum_ordered(k, log2_m.hi);
  return sum_ordered(whole.hi, whole.lo + log2_m.lo);
}

/// 2^(hi + lo) for |hi| < 1022; the polynomial's own relative error is below 3e-17.
inline double exp2_pair(Pair p) {
  constexpr double kToInteger = 6755399441055744.0;  // 1.5 x 2^52: adding it rounds to a whole number
  const double shifted = p.hi + kToInteger;
  const double whole = shifted - kToInteger;
  const double r = (p.hi - whole) + p.lo;  // in [-1/2, 1/2]
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

/// y log2 x as a pair, x normal and above 0.
inline Pair log2_of_power(double x, double y) {
  const Pair log2_x = log2_pair(x);
  const Pair p = product(y, log2_x.hi);
  return sum_ordered(p.hi, p.lo + y * log2_x.lo);
}

/// x^y for a normal x > 0 and |y log2 x| < 1000: bit for bit what reproducible_pow gives there.
inline double pow_normal(double x, double y) {
  return exp2_pair(log2_of_power(x, y));
}

}  // namespace scourbook::hydraulics::kernel
