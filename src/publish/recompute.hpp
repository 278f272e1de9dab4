#pragma once
// Flows computed again by the definitions alone, one value after another: the path that a trace holds a
// replay against. Of the replay it uses nothing; of the curve only the flow of one control at one level.

#include <map>
#include <optional>
#include <utility>
#include <vector>

#include "history/level_datum.hpp"
#include "history/state.hpp"
#include "publish/trace.hpp"
#include "store/book.hpp"

namespace scourbook::publish {

/// A reading that has a value and a gauge zero.
struct LevelReading {
  std::int64_t time_ms = 0;
  Stage stage;
  Level level;
};

/// A flow at one time and level through one side of the edition.
struct Evaluated {
  double discharge_m3s = 0;
  std::vector<TracedCurve> curves;  ///< outgoing first in a blend
};

/// A stretch of time between two readings within one period; flow is linear between its ends.
struct Segment {
  std::int64_t from_ms = 0, until_ms = 0;
  Evaluated from, until;
};

class Recomputer {
 public:
  /// The view must have an edition. Throws StoreError damaged where it names a curve that the book lacks.
  Recomputer(const store::Book& book, const history::View& view);

  /// Readings with a value in [from, until], by time.
  [[nodiscard]] std::vector<LevelReading> readings(Instant from, Instant until) const;
  /// The nearest one before and after `time`, however far.
  [[nodiscard]] std::optional<LevelReading> last_before(Instant time) const;
  [[nodiscard]] std::optional<LevelReading> first_after(Instant time) const;
  /// The flow at `time_ms`, through the period that holds `side_ms` (time_ms itself, or 1 ms before for the
  /// limit from the left at a boundary). Nothing where no curve is in force.
  [[nodiscard]] std::optional<Evaluated> at(std::int64_t time_ms, std::int64_t side_ms, double level_m) const;
  /// Between two neighbouring readings: cut at period boundaries, where the level is interpolated. Empty
  /// where they lie further apart than the longest gap.
  [[nodiscard]] std::vector<Segment> between(const LevelReading& a, const LevelReading& b) const;
  [[nodiscard]] const history::LevelDatum& datum() const { return datum_; }
  [[nodiscard]] std::int64_t longest_gap_ms() const { return longest_gap_ms_; }

 private:
  [[nodiscard]] TracedCurve through(int curve, double level_m) const;

  const store::Book& book_;
  history::View view_;
  history::LevelDatum datum_;
  std::int64_t longest_gap_ms_;
  std::map<int, RatingCurve> curves_;
};

}  // namespace scourbook::publish
