#pragma once
// Flows of a station from its stage, through the curve in force at each time. The same inputs give the same bits.

#include <functional>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "history/state.hpp"
#include "store/book.hpp"
#include "terms/curve.hpp"

namespace scourbook::replay {

/// Flows at the readings of one UTC month (arrays of equal length). discharge is a quiet NaN where there is none; NaN never reaches the book.
struct FlowBlock {
  UtcMonth month{};
  std::vector<std::int64_t> time_ms;
  std::vector<double> level_m;
  std::vector<double> discharge_m3s;
  std::vector<double> sd_ln_q;
  std::vector<Flags> flags;
  std::vector<Quality> quality;       ///< of the unpublished record: at best unchecked
  std::vector<int> curve;             ///< number; 0 where none
  std::vector<std::int8_t> control;   ///< index in the curve's controls that governs; -1 none
};

/// Everything that a replay of one station reads, loaded once: edition with its curves, datum, settings.
class Replayer {
 public:
  Replayer(const store::Book& book, const history::View& view);

  /// Flows of the readings in [from, until), month by month, in order.
  void run(Instant from, Instant until, const std::function<void(const FlowBlock&)>& sink) const;
  /// The readings of a block through their curves (the work of run for one month).
  [[nodiscard]] FlowBlock flows(const store::StageBlock& block) const;

  /// Flow between readings: linear in time between the neighbours where they are no further apart than the longest gap; at a period boundary
  /// the level is interpolated and both curves are read. Day means integrate exactly this.
  struct DayMean {
    StationDay day{};
    std::optional<double> mean_m3s;  ///< nothing where less than the least share of the day has a flow
    double sd_ln_q = 0;              ///< flow-weighted mean of the sds: errors of a curve go together within a day
    Flags flags = 0;
    Quality quality = Quality::missing;
    double share = 0;                ///< of the day with a flow
    std::vector<int> curves;
  };
  void day_means(StationDay from, StationDay until, const std::function<void(const DayMean&)>& sink) const;

 private:
  struct Impl;
  std::shared_ptr<const Impl> impl_;
};

/// Lower-case hex SHA-256 over a month's flows: for each reading time (int64), discharge (binary64 bits, one NaN), flags (uint16), curve (int32), little-endian.
[[nodiscard]] std::string digest(const FlowBlock& block);

/// Runs the whole UTC months that [from, until) touches and makes the record that add_replay stores (number 0).
[[nodiscard]] store::ReplayRecord make_replay(const store::Book& book, const history::View& view, Instant from, Instant until,
                                              const std::function<void(std::int64_t, std::int64_t)>& progress = {});

}  // namespace scourbook::replay
