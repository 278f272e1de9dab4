#pragma once
// Making an edition: intervals cut out of the newest edition and given to curves. Pure; the store keeps the result.

#include <optional>
#include <string>
#include <vector>

#include "terms/history.hpp"

namespace scourbook::history {

/// One interval to be given to a curve, or to none.
struct Adoption {
  Period period;               ///< until empty: see ends_open
  bool ends_open = false;      ///< "open": replaces all that follows; else without `until` it ends where the next period begins
};

/// What an adoption takes away from the edition before.
struct Removed {
  Period part;         ///< the stretch that no longer has its curve
  bool whole = false;  ///< a whole period disappears (needs consent)
};

struct AdoptResult {
  std::vector<std::string> refusals;  ///< empty when it may be stored
  std::vector<Removed> removed;
  std::vector<Period> periods;        ///< of the new edition, by time
};

/// Applies the adoptions one after another. Refuses intervals that end before they begin, that overlap each other,
/// a blend longer than its period or with no curve before it, and (unless `replace`) the loss of a whole period.
/// A period cut in the middle keeps both sides.
[[nodiscard]] AdoptResult adopt(const std::vector<Period>& before, const std::vector<Adoption>& adoptions, bool replace);

/// The period in force at `time`; -1 in a gap.
[[nodiscard]] int period_at(const std::vector<Period>& periods, Instant time);

}  // namespace scourbook::history
