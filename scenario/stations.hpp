#pragma once
// The two stations as they really are: beds before and after each change, true curves, true levels and flows,
// and the gauge zero. Nothing of this is known to the program; field files are measured from it, with errors.

#include <string>
#include <vector>

#include "bed.hpp"
#include "weather.hpp"

namespace scenario {

/// One state of the bed, in force from `from` (the first from the beginning).
struct State {
  Seconds from = 0;  ///< the flood's peak, to the quarter of an hour
  std::string what;  ///< "first bed", "fill", "scour"
  Bed crest;         ///< empty at a station without section control
  Bed channel;       ///< main channel and, where there is one, floodplain
  TrueCurve curve;
};

struct GaugeZero {
  Seconds from = 0;
  double zero_m = 0;
};

struct Site {
  std::string id;
  std::string name;
  std::vector<State> states;
  std::vector<GaugeZero> zeros;
  std::vector<double> flow_m3s;  ///< true, a value a step
  std::vector<double> level_m;   ///< true level of the water surface, a value a step

  [[nodiscard]] const State& state_at(Seconds time) const;
  [[nodiscard]] double zero_at(Seconds time) const;
};

/// TAR-1: rock bar below the gauge (section control), pool above it (channel), floodplain on the right.
/// Filled in the flood of January 2020, scoured in that of November 2022. The staff was set anew in May 2018.
[[nodiscard]] Site millmark();
/// TAR-2: one channel between high banks. Scoured in the flood of January 2020.
[[nodiscard]] Site lowbridge(const Site& millmark);

}  // namespace scenario
