#pragma once
// Random numbers that are the same with every compiler and library.

#include <cstdint>

namespace made {

/// SplitMix64 (Steele, Lea, Flood 2014).
class Random {
 public:
  explicit Random(std::uint64_t seed) : state_(seed) {}
  std::uint64_t bits() {
    std::uint64_t z = (state_ += 0x9e3779b97f4a7c15);
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9;
    z = (z ^ (z >> 27)) * 0x94d049bb133111eb;
    return z ^ (z >> 31);
  }
  /// In [from, to).
  double between(double from, double to) {
    return from + (to - from) * (static_cast<double>(bits() >> 11) * 0x1p-53);
  }
  int below(int count) { return static_cast<int>(bits() % static_cast<std::uint64_t>(count)); }

 private:
  std::uint64_t state_;
};

}  // namespace made
