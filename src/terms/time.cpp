#include "terms/time.hpp"

#include <fmt/format.h>

namespace scourbook {
namespace {

constexpr int kFirstYear = 1677;
constexpr int kLastYear = 2261;
constexpr std::int64_t kMsPerDay = 86'400'000;
constexpr int kLargestOffsetMinutes = 14 * 60;

constexpr bool is_digit(char c) {
  return c >= '0' && c <= '9';
}

/// Two digits at `at`; -1 where they are not both digits or the text ends before.
int two_digits(std::string_view text, std::size_t at) {
  if (text.size() < at + 2 || !is_digit(text[at]) || !is_digit(text[at + 1])) return -1;
  return (text[at] - '0') * 10 + (text[at + 1] - '0');
}

bool is_at(std::string_view text, std::size_t at, char c) {
  return at < text.size() && text[at] == c;
}

ParsedTime fault(TimeFault what) {
  return {{}, what, false};
}

/// Days since 1970-01-01 of the date at the start of `text`, 10 characters long.
TimeFault parse_date(std::string_view text, std::int64_t& days) {
  const int century = two_digits(text, 0);
  const int year_of_century = two_digits(text, 2);
  const int month = two_digits(text, 5);
  const int day = two_digits(text, 8);
  if (century < 0 || year_of_century < 0 || month < 0 || day < 0) return TimeFault::not_a_time;
  if (text[4] != '-' || text[7] != '-') return TimeFault::not_a_time;
  const int year = century * 100 + year_of_century;
  const date::year_month_day ymd(date::year(year), date::month(static_cast<unsigned>(month)),
                                 date::day(static_cast<unsigned>(day)));
  if (year < kFirstYear || year > kLastYear || !ymd.ok()) return TimeFault::no_such_date;
  days = date::sys_days(ymd).time_since_epoch().count();
  return TimeFault::none;
}

/// Fraction of a second at `at` (behind the point): one to nine digits, nothing below a millisecond but
/// zeros. Moves `at` behind it.
bool parse_fraction(std::string_view text, std::size_t& at, int& ms) {
  int scale = 100;
  const std::size_t first = at;
  ms = 0;
  for (; at < text.size() && is_digit(text[at]); ++at, scale /= 10) {
    if (scale == 0 && text[at] != '0') return false;
    ms += (text[at] - '0') * scale;
  }
  return at > first && at - first <= 9;
}

/// Time of day at `at` (behind the T), in milliseconds; moves `at` behind it.
TimeFault parse_clock(std::string_view text, std::size_t& at, std::int64_t& ms_of_day) {
  const int hour = two_digits(text, at);
  const int minute = two_digits(text, at + 3);
  if (hour < 0 || minute < 0 || text[at + 2] != ':') return TimeFault::not_a_time;
  at += 5;
  int second = 0;
  int ms = 0;
  if (is_at(text, at, ':')) {
    second = two_digits(text, at + 1);
    if (second < 0) return TimeFault::not_a_time;
    at += 3;
    if (is_at(text, at, '.') && !parse_fraction(text, ++at, ms)) return TimeFault::not_a_time;
  }
  if (hour > 23 || minute > 59 || second > 59) return TimeFault::no_such_hour;
  ms_of_day = ((hour * 60 + minute) * 60 + second) * std::int64_t{1000} + ms;
  return TimeFault::none;
}

}  // namespace

const char* explain(TimeFault fault) {
  switch (fault) {
    case TimeFault::none:
      return "a time";
    case TimeFault::not_a_time:
      return "not a time";
    case TimeFault::no_such_date:
      return "there is no such date";
    case TimeFault::no_such_hour:
      return "there is no such time of day";
    case TimeFault::no_offset:
      return "a time without an offset from UTC";
  }
  return "";
}

ParsedTime parse_time(std::string_view text, std::optional<UtcOffset> station_offset) {
  if (text.size() < 10) return fault(TimeFault::not_a_time);
  std::int64_t days = 0;
  std::int64_t ms_of_day = 0;
  if (const auto bad = parse_date(text, days); bad != TimeFault::none) return fault(bad);
  std::size_t at = 10;
  if (at < text.size()) {
    if (text[at] != 'T' && text[at] != ' ') return fault(TimeFault::not_a_time);
    ++at;
    if (const auto bad = parse_clock(text, at, ms_of_day); bad != TimeFault::none) return fault(bad);
  }
  std::optional<UtcOffset> offset = station_offset;
  const bool has_offset = at < text.size();
  if (has_offset) {
    offset = parse_offset(text.substr(at));
    if (!offset) return fault(TimeFault::not_a_time);
  }
  if (!offset) return fault(TimeFault::no_offset);
  return {from_ms(days * kMsPerDay + ms_of_day) - offset->minutes, TimeFault::none, has_offset};
}

std::optional<UtcOffset> parse_offset(std::string_view text) {
  if (text == "Z") return UtcOffset{};
  if (text.size() != 6 || (text[0] != '+' && text[0] != '-') || text[3] != ':') return {};
  const int hours = two_digits(text, 1);
  const int minutes = two_digits(text, 4);
  if (hours < 0 || minutes < 0 || minutes > 59) return {};
  const int size = hours * 60 + minutes;
  if (size > kLargestOffsetMinutes) return {};
  return UtcOffset{std::chrono::minutes(text[0] == '-' ? -size : size)};
}

std::string format_time(Instant time, UtcOffset offset) {
  const Instant local = time + offset.minutes;
  const auto day = date::floor<date::days>(local);
  const date::year_month_day ymd(day);
  const std::int64_t ms = (local - day).count();
  std::string text = fmt::format("{:04}-{:02}-{:02}T{:02}:{:02}:{:02}", static_cast<int>(ymd.year()),
                                 static_cast<unsigned>(ymd.month()), static_cast<unsigned>(ymd.day()),
                                 ms / 3'600'000, ms / 60'000 % 60, ms / 1000 % 60);
  if (ms % 1000 != 0) text += fmt::format(".{:03}", ms % 1000);
  return text + format_offset(offset);
}

std::string format_offset(UtcOffset offset) {
  const auto minutes = offset.minutes.count();
  if (minutes == 0) return "Z";
  const auto size = minutes < 0 ? -minutes : minutes;
  return fmt::format("{}{:02}:{:02}", minutes < 0 ? '-' : '+', size / 60, size % 60);
}

}  // namespace scourbook
