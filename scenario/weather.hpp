#pragma once
// The flow of the Tarrowen: storms fall on a wet or dry catchment and run off through a quick, a slow and a
// deep store. Made first; stage follows from it.

#include <vector>

#include "calendar.hpp"

namespace scenario {

/// Ten water years in station time (UTC+1), a value every 15 minutes, the end excluded.
inline const Seconds kBegin = at("2015-10-01T00:00");
inline const Seconds kEnd = at("2025-10-01T00:00");
[[nodiscard]] inline std::size_t step_of(Seconds time) {
  return static_cast<std::size_t>((time - kBegin) / kStep);
}
[[nodiscard]] inline Seconds time_of(std::size_t step) {
  return kBegin + static_cast<Seconds>(step) * kStep;
}

/// Flow at Millmark, m3/s, a value a step. Has a summer in which the river stops (2018), and two floods that
/// are large enough to move its bed (January 2020, November 2022).
[[nodiscard]] std::vector<double> flow_at_millmark();
/// Flow at Lowbridge, further down: the flow at Millmark 90 minutes before, and what joins between.
[[nodiscard]] std::vector<double> flow_at_lowbridge(const std::vector<double>& millmark);

}  // namespace scenario
