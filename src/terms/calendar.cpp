#include "terms/calendar.hpp"

#include <fmt/format.h>

#include <cassert>

namespace scourbook {
namespace {

date::year_month_day date_of(StationDay day) {
  return date::sys_days(date::days(day.number));
}

StationDay day_number(date::year_month_day ymd) {
  return {static_cast<int>(date::sys_days(ymd).time_since_epoch().count())};
}

date::year_month as_year_month(UtcMonth month) {
  // Floor division: months before the year 0 do not occur, but a wrong sign must not pass silently.
  assert(month.number >= 0);
  return date::year(month.number / 12) / date::month(static_cast<unsigned>(month.number % 12 + 1));
}

}  // namespace

StationDay day_of(Instant time, const StationClock& clock) {
  const Instant local = time + clock.offset.minutes - clock.day_start;
  return {static_cast<int>(date::floor<date::days>(local).time_since_epoch().count())};
}

Instant start_of(StationDay day, const StationClock& clock) {
  return Instant(date::days(day.number)) - clock.offset.minutes + clock.day_start;
}

std::string format_day(StationDay day) {
  const auto ymd = date_of(day);
  return fmt::format("{:04}-{:02}-{:02}", static_cast<int>(ymd.year()), static_cast<unsigned>(ymd.month()),
                     static_cast<unsigned>(ymd.day()));
}

StationDay month_start(StationDay day) {
  const auto ymd = date_of(day);
  return day_number(ymd.year() / ymd.month() / 1);
}

StationDay next_month_start(StationDay day) {
  const auto ymd = date_of(day);
  return day_number((ymd.year() / ymd.month() + date::months(1)) / 1);
}

int water_year(StationDay day, const StationClock& clock) {
  const auto ymd = date_of(day);
  const int year = static_cast<int>(ymd.year());
  if (clock.water_year_month == 1) return year;
  return static_cast<int>(static_cast<unsigned>(ymd.month())) >= clock.water_year_month ? year + 1 : year;
}

StationDay water_year_start(int year, const StationClock& clock) {
  assert(clock.water_year_month >= 1 && clock.water_year_month <= 12);
  const int first = clock.water_year_month == 1 ? year : year - 1;
  return day_number(date::year(first) / date::month(static_cast<unsigned>(clock.water_year_month)) / 1);
}

UtcMonth utc_month_of(Instant time) {
  const date::year_month_day ymd(date::floor<date::days>(time));
  return {static_cast<int>(ymd.year()) * 12 + static_cast<int>(static_cast<unsigned>(ymd.month())) - 1};
}

Instant start_of(UtcMonth month) {
  return date::sys_days(as_year_month(month) / 1);
}

std::string format_month(UtcMonth month) {
  const auto ym = as_year_month(month);
  return fmt::format("{:04}-{:02}", static_cast<int>(ym.year()), static_cast<unsigned>(ym.month()));
}

}  // namespace scourbook
