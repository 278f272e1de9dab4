#pragma once
// Instants, offsets from UTC, and the text forms of time (ISO 8601).

#include <date/date.h>

#include <chrono>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace scourbook {

using Millis = std::chrono::milliseconds;
/// A point of time, UTC, in whole milliseconds.
using Instant = date::sys_time<Millis>;

[[nodiscard]] constexpr std::int64_t to_ms(Instant t) { return t.time_since_epoch().count(); }
[[nodiscard]] constexpr Instant from_ms(std::int64_t ms) { return Instant(Millis(ms)); }

/// A fixed offset from UTC, in minutes, east positive. Stations keep one offset all year.
struct UtcOffset {
  std::chrono::minutes minutes{0};
  friend bool operator==(const UtcOffset&, const UtcOffset&) = default;
};

/// What is wrong with a text that should be a time.
enum class TimeFault {
  none,
  not_a_time,    ///< not of the form 2020-01-31T06:15[:00[.000]][Z or +hh:mm] (a space may stand for T; a date alone is its midnight)
  no_such_date,  ///< for example 29 February in a wrong year
  no_such_hour,  ///< hour over 23 (24:00 too), minute or second over 59
  no_offset      ///< no offset in the text, and no station offset was given
};
[[nodiscard]] const char* explain(TimeFault fault);

struct ParsedTime {
  Instant time{};
  TimeFault fault = TimeFault::none;
  bool has_offset = false;  ///< the text carried its own offset
  [[nodiscard]] bool ok() const { return fault == TimeFault::none; }
};

/// Parses ISO 8601; a text without an offset is read in `station_offset`. Fixed format, no locale; years 1677 to 2261.
[[nodiscard]] ParsedTime parse_time(std::string_view text, std::optional<UtcOffset> station_offset);

/// "+01:00", "Z" or "-03:30"; nothing where the text is none of these or beyond 14 hours.
[[nodiscard]] std::optional<UtcOffset> parse_offset(std::string_view text);

/// "2020-01-31T06:15:00+01:00"; seconds always, milliseconds only where they are not zero; "Z" for offset zero.
[[nodiscard]] std::string format_time(Instant time, UtcOffset offset);
[[nodiscard]] std::string format_offset(UtcOffset offset);

}  // namespace scourbook
