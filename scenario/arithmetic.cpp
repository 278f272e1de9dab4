#include "arithmetic.hpp"

#include <cmath>

namespace scenario {
namespace {

constexpr double kLn2 = 0.69314718055994530942;

std::uint64_t rotated(std::uint64_t x, int by) {
  return (x << by) | (x >> (64 - by));
}

}  // namespace

double exponential(double x) {
  // x = n ln 2 + r with |r| <= 0.35, where 14 terms of the series leave 4e-18.
  const double n = std::floor(x / kLn2 + 0.5);
  const double r = x - n * kLn2;
  double sum = 1;
  for (int k = 14; k >= 1; --k) sum = 1 + sum * r / k;
  return std::ldexp(sum, static_cast<int>(n));
}

double logarithm(double x) {
  // x = m 2^e with m near 1; ln m = 2 (s + s^3/3 + ...), s = (m - 1) / (m + 1), |s| <= 0.172.
  int e = 0;
  double m = std::frexp(x, &e);
  if (m < 0.70710678118654752440) {
    m *= 2;
    --e;
  }
  const double s = (m - 1) / (m + 1);
  double sum = 0;
  for (int k = 23; k >= 1; k -= 2) sum = sum * s * s + 1.0 / k;
  return 2 * s * sum + e * kLn2;
}

double power(double x, double y) {
  return x > 0 ? exponential(y * logarithm(x)) : 0;
}

double cosine_of_turn(double turn) {
  const double a = 2 * kPi * (turn - std::floor(turn + 0.5));
  double sum = 1;
  for (int k = 26; k >= 2; k -= 2) sum = 1 - sum * a * a / (k * (k - 1));
  return sum;
}

double rounded(double x, int decimals) {
  double scale = 1;
  for (int i = 0; i < decimals; ++i) scale *= 10;
  return std::floor(x * scale + 0.5) / scale;
}

double significant(double x, int digits) {
  if (x <= 0) return 0;
  double scale = 1;
  double bound = 1;
  for (int i = 1; i < digits; ++i) bound *= 10;  // bound <= x scale < 10 bound
  while (x * scale < bound) scale *= 10;
  while (x * scale >= 10 * bound) scale /= 10;
  return std::floor(x * scale + 0.5) / scale;
}

Random::Random(std::uint64_t seed) {
  for (auto& word : state_) {
    seed += 0x9e3779b97f4a7c15ULL;
    std::uint64_t z = seed;
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9ULL;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebULL;
    word = z ^ (z >> 31);
  }
}

std::uint64_t Random::bits() {
  const std::uint64_t result = rotated(state_[1] * 5, 7) * 9;
  const std::uint64_t t = state_[1] << 17;
  state_[2] ^= state_[0];
  state_[3] ^= state_[1];
  state_[1] ^= state_[2];
  state_[0] ^= state_[3];
  state_[2] ^= t;
  state_[3] = rotated(state_[3], 45);
  return result;
}

double Random::uniform() {
  return (static_cast<double>(bits() >> 12) + 0.5) * 0x1p-52;
}

double Random::normal() {
  double sum = -6;
  for (int i = 0; i < 12; ++i) sum += uniform();
  return sum;
}

double Random::waiting() {
  return -logarithm(uniform());
}

}  // namespace scenario
