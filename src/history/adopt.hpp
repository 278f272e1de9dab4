#pragma once
// Making an edition: intervals cut out of the newest edition and given to curves. Pure; the store keeps the
// result.

#include <optional>
#include <string>
#include <vector>

#include "terms/history.hpp"

namespace scourbook::history {

/// One interval to be given to a curve, or to none.
struct Adoption {
  Period period;  ///< until empty: see ends_open
  /// Read where `until` is empty. True: open, replaces all that follows. False: ends where the next period of
  /// the edition before, or the next adoption beside it, begins; open where there is none.
  bool ends_open = false;
};

/// What an adoption takes away from the edition before.
struct Removed {
  Period part;         ///< the stretch that no longer has its curve
  bool whole = false;  ///< a whole period disappears (needs consent)
};

struct AdoptResult {
  std::vector<std::string> refusals;  ///< empty when it may be stored
  std::vector<std::string> notes;     ///< what becomes of blends that stood in the edition before
  std::vector<Removed> removed;       ///< by time
  std::vector<Period> periods;  ///< of the new edition, by time; empty where an interval itself was refused
};

/// Cuts the intervals of `adoptions` out of `before` and gives them to their curves; their order does not
/// matter.
///
/// Refused: intervals that end before they begin or overlap each other; a blend longer than its period, or
/// with no other curve just before it; and, unless `replace`, the loss of a whole period. A period cut in the
/// middle keeps both sides. What lies left of a cut keeps its blend, even one longer than what is left of it,
/// so that no flow outside the interval changes; right of a cut there is none. A period of the edition before
/// whose blend no longer has a curve to come from loses it (a note says so). Touching periods with the same
/// curve and no blend between them become one.
/// `shown` is the offset in which the texts give times.
[[nodiscard]] AdoptResult adopt(const std::vector<Period>& before, const std::vector<Adoption>& adoptions,
                                bool replace, UtcOffset shown = {});

/// The index of the period in force at `time`; -1 in a gap. [from, until): a boundary belongs to the later
/// period.
[[nodiscard]] int period_at(const std::vector<Period>& periods, Instant time);

/// "curve 3", or "none (works)".
[[nodiscard]] std::string describe_holder(const Period& period);

}  // namespace scourbook::history
