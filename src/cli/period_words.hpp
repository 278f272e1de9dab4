#pragma once
// The words of --period: CURVE,FROM[,UNTIL][,blend=H].

#include <string>

#include "cli/context.hpp"
#include "history/adopt.hpp"

namespace scourbook::cli {

/// A number of a curve, or none:REASON, into `period`.
void read_curve_word(const std::string& text, Period& period);
/// A time, or the word open, into `adoption`; empty: ends where the next period begins.
void read_until_word(const std::string& text, UtcOffset offset, const std::string& option,
                     history::Adoption& adoption);
/// Hours, 0 or more.
[[nodiscard]] Millis blend_of(const std::string& hours);
/// One --period. All throw UsageError.
[[nodiscard]] history::Adoption adoption_of(const std::string& text, UtcOffset offset);

}  // namespace scourbook::cli
