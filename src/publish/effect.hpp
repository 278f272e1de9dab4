#pragma once
// What an adoption would change in flows, before anything is written.

#include <optional>
#include <vector>

#include "history/adopt.hpp"
#include "history/state.hpp"
#include "store/book.hpp"

namespace scourbook::publish {

/// Day means of one stretch of the new edition (station days that it touches) against what stood
/// before: the published day means where there are any, else those of the newest edition.
struct StretchEffect {
  Instant from{};
  Instant until{};  ///< the end of the record where the period is open
  std::optional<int> curve;
  std::int64_t days = 0;            ///< with a figure before or after
  std::int64_t published_days = 0;  ///< of them published
  std::int64_t changed_days = 0;    ///< figure as published differs
  std::int64_t beyond_5_pct = 0;
  std::int64_t beyond_10_pct = 0;
  std::int64_t appeared = 0;  ///< a figure where there was none
  std::int64_t disappeared = 0;
  std::optional<double> volume_change_pct;  ///< over days with both
  std::optional<double> largest_change_pct;
  StationDay largest_on{};
};

struct Effect {
  std::vector<StretchEffect> stretches;  ///< of the adopted intervals, by time
  std::vector<int> publications;         ///< that hold a changed day
};

/// `periods` of a tentative edition against the state `before` (an edition may be missing: then all appears).
[[nodiscard]] Effect effect_of(const store::Book& book, const history::View& before,
                               const std::vector<Period>& periods,
                               const std::vector<history::Adoption>& adopted);

}  // namespace scourbook::publish
