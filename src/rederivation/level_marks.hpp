#pragma once
// Marks on fixed ground that two surveys share: how far the new survey's levels are off the old one's.

#include <optional>
#include <string>

#include "terms/records.hpp"

namespace scourbook::rederivation {

struct MarkShift {
  double shift_m = 0;  ///< median of new - old over the shared marks
  double sd_m = 0;     ///< max(0.01 m, spread / sqrt(count))
  int count = 0;
  double largest_gap_m = 0;  ///< of a mark from the median
  std::string largest_at;    ///< its name
};

/// Marks are the same where cross-section and name are. Nothing where the surveys share none, or are one and
/// the same.
[[nodiscard]] std::optional<MarkShift> mark_shift(const Survey& before, const Survey& now);

}  // namespace scourbook::rederivation
