#pragma once
// What a replayer holds: read from the book once.

#include <span>
#include <string>
#include <vector>

#include "history/level_datum.hpp"
#include "replay/curve_flows.hpp"
#include "replay/replay.hpp"
#include "replay/timeline.hpp"

namespace scourbook::replay {

struct Inputs {
  const store::Book& book;
  std::string station;
  Known data;  ///< the data version
  StationClock clock;
  store::Settings settings;
  history::LevelDatum datum;
  Timeline timeline;

  /// Months with readings that [from, until) touches, in order.
  [[nodiscard]] std::vector<UtcMonth> months(Instant from, Instant until) const;
  [[nodiscard]] store::StageBlock stage(UtcMonth month) const {
    return book.stage_block(station, month, data);
  }
  /// Flows at levels that all lie in one stretch; `out` has begun as FlowColumns do. Quality of readings is
  /// not in them.
  void through(const Stretch& stretch, std::span<const std::int64_t> time_ms, std::span<const double> level_m,
               const FlowSpans& out) const;
};

}  // namespace scourbook::replay
