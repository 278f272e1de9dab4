#pragma once
// Flows of a station from its stage, through the curve in force at each time. The same inputs give the same
// bits.

#include <cstdint>
#include <functional>
#include <memory>
#include <optional>
#include <vector>

#include "history/state.hpp"
#include "replay/flow_block.hpp"
#include "store/book.hpp"
#include "terms/curve.hpp"

namespace scourbook::replay {

/// A flow at one time: at a reading, or on one side of a period boundary between two readings.
struct FlowPoint {
  std::int64_t time_ms = 0;
  double level_m = 0;
  double discharge_m3s = 0;
  double sd_ln_q = 0;
  Flags flags = 0;
  Quality quality = Quality::missing;
  int curve = 0;
  int outgoing = 0;  ///< the curve that is passed from, inside a blend; 0 else
};

/// A span of time over which the flow is linear between its ends. The later end is the limit from the left:
/// the curve of the piece's own period, also where the next period begins there.
struct FlowPiece {
  FlowPoint from;
  FlowPoint until;
};

/// The mean flow of one station day.
struct DayMean {
  StationDay day{};
  std::optional<double>
      mean_m3s;        ///< over the share with a flow; nothing where that is under the least share of the day
  double sd_ln_q = 0;  ///< flow-weighted mean of the sds: errors of a curve go together within a day
  Flags flags = 0;  ///< of all values that took part; no-flow only where the mean is 0, gap where share < 1
  Quality quality = Quality::missing;  ///< the worst that took part; at best estimate where share < 1,
                                       ///< missing without a mean
  double share = 0;                    ///< of the day with a flow
  std::vector<int> curves;  ///< curves that took part, in order of time, in a blend the outgoing one too
};

struct Inputs;

/// Everything that a replay of one station reads, loaded once: edition with its curves, datum, settings. The
/// view's edition need not be stored (number 0), so that a tentative one can be tried. The book must outlive
/// the replayer.
///
/// Of a reading at t in the period [from, until) of curve k, with level z:
///   flow     rating::evaluate(k, z); in [from, from + blend): (1 - x) Q_out(z) + x Q_k(z), x = (t - from) /
///   blend sd       rating::sd_ln_q(k, z); in a blend (1 - x) Q_out sd_out + x Q_k sd_k, over the flow flags
///   below-gauged, above-gauged: the curve's flow against its gauged range; above-surveyed: z above the
///            surveyed top; no-flow: a flow of 0; inferred, carried: as the curve; in a blend those of both
///            and blended
///   quality  the worse of the reading's and: poor above the surveyed top or the set factor times the largest
///   flow gauged
///            in the lineage; estimate where inferred, blended or above the set factor times the curve's
///            largest gauging
/// A reading that is blank or has the quality missing is none. Outside periods, in periods without a curve
/// and before the first gauge zero there is no flow.
class Replayer {
 public:
  /// Throws StoreError refused where the view has no edition, damaged where a curve of the edition is not in
  /// the book.
  Replayer(const store::Book& book, const history::View& view);

  /// Flows of the readings in [from, until), month by month, in order; months without readings are passed
  /// over.
  void run(Instant from, Instant until, const std::function<void(const FlowBlock&)>& sink) const;
  /// The readings of a block through their curves (the work of run for one month).
  [[nodiscard]] FlowBlock flows(const store::StageBlock& block) const;

  /// The pieces that overlap [from, until), in order of time, whole (not cut at its ends). Between two
  /// neighbouring readings that are no further apart than the longest gap the flow is linear in time; at a
  /// period boundary between them the level is interpolated, linear in time, and the curves on both sides are
  /// read. Readings that are none do not part neighbours.
  void pieces(Instant from, Instant until, const std::function<void(const FlowPiece&)>& sink) const;
  using DayMean = replay::DayMean;
  /// Every station day of [from, until) in order: exact integrals of the pieces. A day's figures do not
  /// depend on the range.
  void day_means(StationDay from, StationDay until, const std::function<void(const DayMean&)>& sink) const;

 private:
  std::shared_ptr<const Inputs> inputs_;
};

/// Runs the whole UTC months that [from, until) touches and makes the record that add_replay stores (number
/// 0): from and until as asked, a digest for each month that has readings. `progress(months done, months in
/// all)` may be empty.
[[nodiscard]] store::ReplayRecord make_replay(
    const store::Book& book, const history::View& view, Instant from, Instant until,
    const std::function<void(std::int64_t, std::int64_t)>& progress = {});

}  // namespace scourbook::replay
