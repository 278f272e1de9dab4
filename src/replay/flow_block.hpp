#pragma once
// Flows at the readings of one UTC month, as a replay computes them, and their digest.

#include <cstdint>
#include <string>
#include <vector>

#include "terms/calendar.hpp"
#include "terms/quality.hpp"

namespace scourbook::replay {

/// Flows at the readings of one UTC month (arrays of equal length, times rising). discharge is a quiet NaN
/// where there is none: no reading, no gauge zero yet, no period, a period without a curve. NaN never reaches
/// the book.
struct FlowBlock {
  UtcMonth month{};
  std::vector<std::int64_t> time_ms;
  std::vector<double> level_m;  ///< quiet NaN where the reading is missing or has no gauge zero
  std::vector<double> discharge_m3s;
  std::vector<double> sd_ln_q;  ///< 0 where there is no discharge or it is 0
  std::vector<Flags> flags;     ///< `gap` alone where there is no discharge
  std::vector<Quality>
      quality;  ///< of the unpublished record: at best unchecked; missing where there is no discharge
  std::vector<int> curve;  ///< number, in a blend of the incoming curve; 0 where there is no discharge
  std::vector<std::int8_t> control;  ///< index in the curve's controls that governs; -1 none
};

/// Lower-case hex SHA-256 over a month's flows: for each reading time (int64), discharge (binary64 bits, one
/// NaN), flags (uint16), curve (int32), little-endian, without padding.
[[nodiscard]] std::string digest(const FlowBlock& block);

}  // namespace scourbook::replay
