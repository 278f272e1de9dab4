#pragma once
// Editions as people read them: periods, and what changed between two.

#include <string>
#include <vector>

#include "cli/context.hpp"
#include "history/adopt.hpp"
#include "terms/history.hpp"

namespace scourbook::cli {

/// Periods with the survey of each curve and how many gaugings it used.
[[nodiscard]] std::string periods_text(const store::Book& book, const std::string& station,
                                       const std::vector<Period>& periods, UtcOffset offset);
[[nodiscard]] Json periods_json(const store::Book& book, const std::string& station,
                                const std::vector<Period>& periods, UtcOffset offset);

/// A stretch of time that two editions treat differently.
struct Change {
  Instant from{};
  std::optional<Instant> until;
  std::string before;  ///< "curve 1", "none (works)", "no period", with the blend where there is one
  std::string after;
};
/// Stretches by time; touching ones of the same change are one.
[[nodiscard]] std::vector<Change> changes_between(const std::vector<Period>& before,
                                                  const std::vector<Period>& after);
[[nodiscard]] std::string changes_text(const std::vector<Change>& changes, UtcOffset offset);
[[nodiscard]] Json changes_json(const std::vector<Change>& changes, UtcOffset offset);

/// "2020-01-14T06:30:00+01:00", or "open".
[[nodiscard]] std::string end_text(const std::optional<Instant>& until, UtcOffset offset);

}  // namespace scourbook::cli
