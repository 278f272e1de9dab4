#pragma once
// Stage as the book keeps it: pieces that are never rewritten, and what they say together.

#include <cstdint>
#include <limits>
#include <optional>
#include <string>
#include <vector>

#include "terms/calendar.hpp"
#include "terms/quality.hpp"
#include "terms/quantity.hpp"

namespace scourbook::store {

enum class StageUnit { metre, foot };

/// Missing reading in a piece or block.
inline constexpr std::int64_t kMissing = std::numeric_limits<std::int64_t>::min();

/// The recorded whole number `value` (in units of 10^-decimals of the unit) in ticks of 1e-8 m, rounded half
/// away from zero; kMissing stays. Exact for metres up to 8 decimals and feet up to 4.
[[nodiscard]] std::int64_t ticks_of(std::int64_t value, StageUnit unit, int decimals);

/// One recorded reading on its way into the book.
struct StageReading {
  Instant time{};
  std::int64_t value = kMissing;  ///< in 10^-decimals of the unit, as recorded
  Quality quality = Quality::unchecked;
  std::int64_t line = 0;
};

/// Readings of one station from one file, times rising strictly.
struct StageSeries {
  std::string station;
  StageUnit unit = StageUnit::metre;
  int decimals = 3;
  std::vector<StageReading> readings;
};

/// The readings in force of one UTC month: from the latest pieces known. Arrays of equal length, times
/// rising.
struct StageBlock {
  UtcMonth month{};
  std::vector<std::int64_t> time_ms;
  std::vector<std::int64_t> ticks;  ///< stage in 1e-8 m, kMissing where missing
  std::vector<Quality> quality;
  std::vector<std::int32_t> piece;   ///< index into `pieces`
  std::vector<std::int64_t> pieces;  ///< piece ids
};

/// Where one reading came from.
struct ReadingOrigin {
  std::int64_t piece = 0;
  std::int64_t act = 0;
  std::int64_t file = 0;
  std::int64_t line = 0;
  std::string recorded;  ///< as recorded, with its decimals: "1.234"
  StageUnit unit = StageUnit::metre;
  Quality quality = Quality::unchecked;
};

}  // namespace scourbook::store
