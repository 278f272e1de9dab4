#include "hydraulics/power.hpp"

#include <algorithm>
#include <cassert>
#include <cfloat>
#include <limits>

#include "hydraulics/power_kernel.hpp"

namespace scourbook::hydraulics {
namespace {

using kernel::Pair;

/// log2 of any finite x > 0; subnormal ones are scaled first.
Pair log2_of(double x) {
  if (x >= DBL_MIN) return kernel::log2_pair(x);
  const Pair scaled = kernel::log2_pair(x * 0x1p54);
  const Pair moved = kernel::sum_ordered(scaled.hi, -54.0);
  return kernel::sum_ordered(moved.hi, moved.lo + scaled.lo);
}

/// 2^p for any p that is not a NaN.
double exp2_of(Pair p) {
  if (p.hi > -1000 && p.hi < 1000) return kernel::exp2_pair(p);
  if (p.hi > 1100) return std::numeric_limits<double>::infinity();
  if (p.hi < -1100) return 0;
  // In two steps, because the exponent of the result may leave the normal range; the subtraction is exact.
  const double away = p.hi > 0 ? 512.0 : -512.0;
  return kernel::exp2_pair({p.hi - away, p.lo}) * (p.hi > 0 ? 0x1p512 : 0x1p-512);
}

}  // namespace

double reproducible_pow(double x, double y) {
  assert(x >= 0 && y == y);
  if (y == 0) return 1;
  if (x == 0 || x > DBL_MAX) return (x == 0) == (y > 0) ? 0 : std::numeric_limits<double>::infinity();
  // Beyond 2^70 every x but 1 saturates; so limited, the splitting of y cannot overflow.
  const double bounded = std::clamp(y, -0x1p70, 0x1p70);
  const Pair log2_x = log2_of(x);
  const Pair p = kernel::product(bounded, log2_x.hi);
  return exp2_of(kernel::sum_ordered(p.hi, p.lo + bounded * log2_x.lo));
}

double reproducible_exp2(double x) {
  assert(x == x);
  return exp2_of({x, 0});
}

double reproducible_log2(double x) {
  assert(x > 0 && x <= DBL_MAX);
  return log2_of(x).hi;
}

double reproducible_exp(double x) {
  assert(x == x);
  constexpr Pair kLog2OfE{0x1.71547652b82fep+0, 0x1.777d0ffda0d24p-56};
  return exp2_of(kernel::product(Pair{std::clamp(x, -1000.0, 1000.0), 0}, kLog2OfE));
}

double reproducible_log(double x) {
  assert(x > 0 && x <= DBL_MAX);
  constexpr Pair kLn2{0x1.62e42fefa39efp-1, 0x1.abc9e3b39803fp-56};
  return kernel::product(log2_of(x), kLn2).hi;
}

}  // namespace scourbook::hydraulics
