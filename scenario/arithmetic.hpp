#pragma once
// Arithmetic of the generator that gives the same bits on every IEEE machine: + - * / sqrt, floor and scaling
// by powers of two only, never the C library's exp or log. Accuracy 1e-14 relative, plenty for an invented
// river.

#include <cstdint>

namespace scenario {

inline constexpr double kPi = 3.14159265358979323846;
inline constexpr double kGravity = 9.80665;  ///< m/s2

[[nodiscard]] double exponential(double x);
/// Natural logarithm; x > 0.
[[nodiscard]] double logarithm(double x);
/// x^y for x >= 0 (0 for x = 0).
[[nodiscard]] double power(double x, double y);
/// Cosine of a whole turn: 1 at turn = 0, -1 at 0.5.
[[nodiscard]] double cosine_of_turn(double turn);
/// Rounded to `decimals` decimals, halves upwards.
[[nodiscard]] double rounded(double x, int decimals);
/// Rounded to `digits` significant digits; 0 stays 0.
[[nodiscard]] double significant(double x, int digits);

/// Random numbers: xoshiro256** (Blackman and Vigna 2021), its state filled by SplitMix64 from a seed.
class Random {
 public:
  explicit Random(std::uint64_t seed);
  [[nodiscard]] std::uint64_t bits();
  /// In (0, 1), never an end.
  [[nodiscard]] double uniform();
  /// Standard normal as the sum of twelve uniforms less six: tails end at 6, which no use here misses.
  [[nodiscard]] double normal();
  /// Exponential of mean 1.
  [[nodiscard]] double waiting();

 private:
  std::uint64_t state_[4];
};

}  // namespace scenario
