#pragma once
// Quantities with their unit in the type. Heights are whole numbers of 1e-8 m ("ticks"), so that sums of
// stage, gauge zero and corrections are exact and the same on every machine; they become a double only once,
// as ticks / 1e8. Mixing kinds (stage + discharge, level + level) does not compile.

#include <cmath>
#include <compare>
#include <cstdint>

namespace scourbook {

inline constexpr double kTicksPerMetre = 1e8;
/// The international foot, exactly 0.3048 m.
inline constexpr std::int64_t kTicksPerFoot = 30'480'000;
inline constexpr double kMetresPerFoot = 0.3048;
/// Standard acceleration of gravity, m/s2 (3rd CGPM, 1901).
inline constexpr double kGravity = 9.80665;

/// A height or a difference of heights, held as whole ticks of 1e-8 m. Tag makes the kinds distinct.
template <class Tag>
class Height {
 public:
  constexpr Height() = default;
  [[nodiscard]] static constexpr Height from_ticks(std::int64_t ticks) { return Height(ticks); }
  /// The nearest tick, halves away from zero. `metres` must be finite and below 9e10 in size.
  [[nodiscard]] static Height from_metres(double metres) {
    return Height(static_cast<std::int64_t>(std::llround(metres * kTicksPerMetre)));
  }
  [[nodiscard]] constexpr std::int64_t ticks() const { return ticks_; }
  [[nodiscard]] constexpr double metres() const { return static_cast<double>(ticks_) / kTicksPerMetre; }
  friend constexpr auto operator<=>(Height, Height) = default;

 private:
  explicit constexpr Height(std::int64_t ticks) : ticks_(ticks) {}
  std::int64_t ticks_ = 0;
};

/// Stage: height of the water surface above the gauge zero (ISO 772).
using Stage = Height<struct StageTag>;
/// Gauge zero: elevation of the gauge's zero above the station's datum.
using GaugeZero = Height<struct GaugeZeroTag>;
/// Level: elevation of the water surface above the station's datum.
using Level = Height<struct LevelTag>;
/// A change of height: a stage correction, a shift, a difference of two levels.
using HeightChange = Height<struct HeightChangeTag>;

constexpr Level operator+(Stage s, GaugeZero z) { return Level::from_ticks(s.ticks() + z.ticks()); }
constexpr Stage operator-(Level l, GaugeZero z) { return Stage::from_ticks(l.ticks() - z.ticks()); }
constexpr Stage operator+(Stage s, HeightChange c) { return Stage::from_ticks(s.ticks() + c.ticks()); }
constexpr Level operator+(Level l, HeightChange c) { return Level::from_ticks(l.ticks() + c.ticks()); }
constexpr HeightChange operator-(Level a, Level b) { return HeightChange::from_ticks(a.ticks() - b.ticks()); }
constexpr HeightChange operator-(GaugeZero a, GaugeZero b) {
  return HeightChange::from_ticks(a.ticks() - b.ticks());
}

/// Discharge in m3/s.
class Discharge {
 public:
  constexpr Discharge() = default;
  [[nodiscard]] static constexpr Discharge from_m3s(double m3s) { return Discharge(m3s); }
  [[nodiscard]] constexpr double m3s() const { return m3s_; }
  friend constexpr auto operator<=>(Discharge, Discharge) = default;
  friend constexpr Discharge operator+(Discharge a, Discharge b) { return Discharge(a.m3s_ + b.m3s_); }

 private:
  explicit constexpr Discharge(double m3s) : m3s_(m3s) {}
  double m3s_ = 0;
};

}  // namespace scourbook
