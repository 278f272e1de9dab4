#pragma once
// Days, months and water years in a station's own clock.

#include <chrono>
#include <string>

#include "terms/time.hpp"

namespace scourbook {

/// How a station divides time: its fixed offset, the minute of the local day at which its day starts (0 =
/// midnight), the month in which its water year starts (10 = October; common practice, named by the year it ends).
struct StationClock {
  UtcOffset offset{};
  std::chrono::minutes day_start{0};
  int water_year_month = 10;
  friend bool operator==(const StationClock&, const StationClock&) = default;
};

/// A station day: counted in days since 1970-01-01 in the station's clock; named by the date on which it starts.
struct StationDay {
  int number = 0;
  friend auto operator<=>(const StationDay&, const StationDay&) = default;
};

[[nodiscard]] StationDay day_of(Instant time, const StationClock& clock);
[[nodiscard]] Instant start_of(StationDay day, const StationClock& clock);
[[nodiscard]] std::string format_day(StationDay day);  ///< "2020-01-31"
/// First day of the calendar month (station clock) that holds `day`, and of the month after it.
[[nodiscard]] StationDay month_start(StationDay day);
[[nodiscard]] StationDay next_month_start(StationDay day);
/// The water year that holds `day`, named by the calendar year in which it ends (by itself where it starts in January).
[[nodiscard]] int water_year(StationDay day, const StationClock& clock);
[[nodiscard]] StationDay water_year_start(int year, const StationClock& clock);

/// A month of UTC, counted as year * 12 + (month - 1).
struct UtcMonth {
  int number = 0;
  friend auto operator<=>(const UtcMonth&, const UtcMonth&) = default;
};
[[nodiscard]] UtcMonth utc_month_of(Instant time);
[[nodiscard]] Instant start_of(UtcMonth month);
[[nodiscard]] std::string format_month(UtcMonth month);  ///< "2020-01"

}  // namespace scourbook
