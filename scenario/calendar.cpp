#include "calendar.hpp"

#include <cassert>
#include <cstdio>

namespace scenario {
namespace {

/// The number in text[from, from + length), or -1.
int digits(std::string_view text, std::size_t from, std::size_t length) {
  if (from + length > text.size()) return -1;
  int value = 0;
  for (char c : text.substr(from, length)) {
    if (c < '0' || c > '9') return -1;
    value = value * 10 + (c - '0');
  }
  return value;
}

}  // namespace

std::int64_t days_from_date(int year, int month, int day) {
  // Years begin in March, so that the leap day is the last of its year.
  const std::int64_t y = month <= 2 ? year - 1 : year;
  const std::int64_t m = month <= 2 ? month + 9 : month - 3;
  const std::int64_t of_year = (153 * m + 2) / 5 + day - 1;
  return 365 * y + y / 4 - y / 100 + y / 400 + of_year - 719468;
}

std::optional<Seconds> parse_time(std::string_view text, Seconds offset) {
  const int year = digits(text, 0, 4), month = digits(text, 5, 2), day = digits(text, 8, 2);
  const int hour = digits(text, 11, 2), minute = digits(text, 14, 2);
  if (year < 0 || month < 1 || month > 12 || day < 1 || hour < 0 || minute < 0) return std::nullopt;
  std::size_t i = 16;
  int second = 0;
  if (i < text.size() && text[i] == ':') {
    second = digits(text, i + 1, 2);
    i += 3;
    if (second < 0) return std::nullopt;
    while (i < text.size() && (text[i] == '.' || (text[i] >= '0' && text[i] <= '9'))) ++i;
  }
  const std::string_view zone = text.substr(i);
  if (zone == "Z") {
    offset = 0;
  } else if (zone.size() == 6 && (zone[0] == '+' || zone[0] == '-')) {
    const int hours = digits(zone, 1, 2), minutes = digits(zone, 4, 2);
    if (hours < 0 || minutes < 0) return std::nullopt;
    offset = (zone[0] == '-' ? -1 : 1) * (hours * kHour + minutes * 60);
  } else if (!zone.empty()) {
    return std::nullopt;
  }
  return days_from_date(year, month, day) * kDay + hour * kHour + minute * 60 + second - offset;
}

Seconds at(std::string_view text, Seconds offset) {
  const auto time = parse_time(text, offset);
  assert(time.has_value());
  return *time;
}

std::string local_text(Seconds time, Seconds offset) {
  const Seconds local = time + offset;
  const Seconds of_day = ((local % kDay) + kDay) % kDay;
  // Back from the day number, by the same March years.
  const std::int64_t day = (local - of_day) / kDay + 719468;
  const std::int64_t era = day / 146097;
  const std::int64_t of_era = day % 146097;
  const std::int64_t y = (of_era - of_era / 1460 + of_era / 36524 - of_era / 146096) / 365;
  const std::int64_t of_year = of_era - (365 * y + y / 4 - y / 100);
  const std::int64_t m = (5 * of_year + 2) / 153;
  const int date = static_cast<int>(of_year - (153 * m + 2) / 5 + 1);
  const int month = static_cast<int>(m < 10 ? m + 3 : m - 9);
  const int year = static_cast<int>(y + 400 * era + (month <= 2 ? 1 : 0));
  char text[64];
  std::snprintf(text, sizeof text, "%04d-%02d-%02dT%02d:%02d", year, month, date,
                static_cast<int>(of_day / kHour), static_cast<int>(of_day % kHour / 60));
  return text;
}

std::string utc_text(Seconds time) {
  return local_text(time, 0) + "Z";
}

}  // namespace scenario
