#pragma once
// Times of the scenario: whole seconds since 1970-01-01T00:00Z, and their ISO 8601 text.

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace scenario {

using Seconds = std::int64_t;
inline constexpr Seconds kDay = 86400;
inline constexpr Seconds kHour = 3600;
inline constexpr Seconds kStep = 900;  ///< between readings

/// Days since 1970-01-01 of a date of the proleptic Gregorian calendar.
[[nodiscard]] std::int64_t days_from_date(int year, int month, int day);
/// Time of a text "2020-01-14T05:00" or with seconds, ending in "Z", an offset such as "+01:00", or nothing,
/// which means `offset` seconds east of UTC. None where it is no such text.
[[nodiscard]] std::optional<Seconds> parse_time(std::string_view text, Seconds offset);
/// The same for texts in the source code, which must be right.
[[nodiscard]] Seconds at(std::string_view text, Seconds offset = kHour);
/// "2020-01-14T05:00" in a clock `offset` seconds east of UTC, without naming the offset.
[[nodiscard]] std::string local_text(Seconds time, Seconds offset);
/// "2020-01-14T04:00Z".
[[nodiscard]] std::string utc_text(Seconds time);

}  // namespace scenario
