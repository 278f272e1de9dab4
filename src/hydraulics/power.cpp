#include "hydraulics/power.hpp"

#include <algorithm>
#include <array>
#include <cassert>
#include <cfloat>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>

#include "hydraulics/power_kernel.hpp"

namespace scourbook::hydraulics {
namespace {

using kernel::Pair;
using kernel::Product;

/// log2 of any finite x > 0; subnormal ones are scaled first.
Pair log2_of(double x) {
  if (x >= DBL_MIN) return kernel::log2_pair(x);
  const Pair scaled = kernel::log2_pair(x * 0x1p54);
  const double lead = kernel::leading(scaled.lead - 54.0);
  return {lead, scaled.rest - ((lead + 54.0) - scaled.lead)};
}

/// 2^p for any p that is not a NaN.
double exp2_of(Product p) {
  if (p.high > -1000 && p.high < 1000) return kernel::exp2_sum(p);
  if (p.high > 1100) return std::numeric_limits<double>::infinity();
  if (p.high < -1100) return 0;
  // In two steps, because the exponent of the result may leave the normal range; the subtraction is exact.
  const double away = p.high > 0 ? 512.0 : -512.0;
  return kernel::exp2_sum({p.high - away, p.low}) * (p.high > 0 ? 0x1p512 : 0x1p-512);
}

// The vector code is chosen when the program starts. Wider vectors do the same operations in the same order,
// none of them fused, and so give the same bits.
#if defined(__x86_64__) && defined(__GLIBC__)
#define SCOURBOOK_WIDEST_VECTORS __attribute__((target_clones("avx512f", "avx2", "default")))
#else
#define SCOURBOOK_WIDEST_VECTORS
#endif

/// out[i] = x[i]^y; false, and `out` of no use, where an x lies outside [lowest, highest].
SCOURBOOK_WIDEST_VECTORS bool pow_block(const double* __restrict x, std::size_t count, double y,
                                        double lowest, double highest, double* __restrict out) {
  std::uint64_t outside = 0;
  for (std::size_t i = 0; i < count; ++i) {
    outside |= static_cast<std::uint64_t>(!(x[i] >= lowest)) | static_cast<std::uint64_t>(!(x[i] <= highest));
    out[i] = kernel::pow_normal(x[i], y);
  }
  return outside == 0;
}

}  // namespace

double reproducible_pow(double x, double y) {
  assert(x >= 0 && y == y);
  if (y == 0) return 1;
  if (x == 0 || x > DBL_MAX) return (x == 0) == (y > 0) ? 0 : std::numeric_limits<double>::infinity();
  // Beyond 2^70 every x but 1 saturates; so limited, an infinite y gives no NaN.
  return exp2_of(kernel::product(std::clamp(y, -0x1p70, 0x1p70), log2_of(x)));
}

void reproducible_pow(std::span<const double> x, double y, std::span<double> out) {
  assert(x.size() == out.size());
  constexpr std::size_t kBlock = 256;
  std::array<double, kBlock> results;
  // Between these the kernel alone is right: |y log2 x| < 1000 with a margin, x normal.
  const double highest = std::min(reproducible_pow(2.0, 990 / std::abs(y)), DBL_MAX);
  const double lowest = std::max(1 / highest, DBL_MIN);
  for (std::size_t at = 0; at < x.size(); at += kBlock) {
    const std::size_t count = std::min(kBlock, x.size() - at);
    if (y != 0 && pow_block(&x[at], count, y, lowest, highest, results.data())) {
      std::copy_n(results.begin(), count, &out[at]);
    } else {
      for (std::size_t i = at; i < at + count; ++i) out[i] = reproducible_pow(x[i], y);
    }
  }
}

double reproducible_exp2(double x) {
  assert(x == x);
  return exp2_of({x, 0});
}

double reproducible_log2(double x) {
  assert(x > 0 && x <= DBL_MAX);
  const Pair log2_x = log2_of(x);
  return log2_x.lead + log2_x.rest;
}

double reproducible_exp(double x) {
  assert(x == x);
  constexpr Pair kLog2OfE{0x1.7154760000000p+0, 0x1.4ae0bf85ddf44p-26};
  return exp2_of(kernel::product(std::clamp(x, -1000.0, 1000.0), kLog2OfE));
}

double reproducible_log(double x) {
  assert(x > 0 && x <= DBL_MAX);
  constexpr Pair kLn2{0x1.62e42f8000000p-1, 0x1.be8e7bcd5e4f2p-27};
  constexpr double kWholeLn2 = 0x1.62e42fefa39efp-1;
  const Pair log2_x = log2_of(x);
  return log2_x.lead * kLn2.lead + (log2_x.lead * kLn2.rest + log2_x.rest * kWholeLn2);
}

}  // namespace scourbook::hydraulics
