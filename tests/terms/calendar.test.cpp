#include "terms/calendar.hpp"

#include <random>

using namespace scourbook;
using std::chrono::minutes;

namespace {

Instant at(const std::string& text) {
  return parse_time(text, UtcOffset{}).time;
}
StationClock clock_of(int offset, int day_start, int month) {
  return {UtcOffset{minutes(offset)}, minutes(day_start), month};
}

}  // namespace

TEST_CASE("a station day holds the times from its start to the next") {
  std::mt19937_64 random(7);
  std::uniform_int_distribution<std::int64_t> ms(-4'000'000'000'000, 4'000'000'000'000);
  std::uniform_int_distribution<int> offset(-14 * 60, 14 * 60);
  std::uniform_int_distribution<int> start(0, 1439);
  for (int i = 0; i < 5'000; ++i) {
    const StationClock clock = clock_of(offset(random), start(random), 10);
    const Instant time = from_ms(ms(random));
    const StationDay day = day_of(time, clock);
    CHECK(start_of(day, clock) <= time);
    CHECK(time < start_of(StationDay{day.number + 1}, clock));
    CHECK(day_of(start_of(day, clock), clock) == day);
  }
}

TEST_CASE("days are named by the date on which they start") {
  const StationClock midnight = clock_of(60, 0, 10);
  CHECK(format_day(day_of(at("2020-01-31T22:59Z"), midnight)) == "2020-01-31");
  CHECK(format_day(day_of(at("2020-01-31T23:00Z"), midnight)) == "2020-02-01");
  const StationClock nine = clock_of(60, 9 * 60, 10);
  CHECK(format_day(day_of(at("2020-02-01T07:59Z"), nine)) == "2020-01-31");
  CHECK(start_of(day_of(at("2020-02-01T08:00Z"), nine), nine) == at("2020-02-01T08:00Z"));
}

TEST_CASE("months of station days") {
  const StationClock clock;
  const StationDay day = day_of(at("2020-02-29"), clock);
  CHECK(format_day(month_start(day)) == "2020-02-01");
  CHECK(format_day(next_month_start(day)) == "2020-03-01");
  CHECK(format_day(next_month_start(day_of(at("2020-12-31"), clock))) == "2021-01-01");
}

TEST_CASE("water years are named by the year in which they end") {
  const StationClock october = clock_of(0, 0, 10);
  CHECK(water_year(day_of(at("2019-09-30"), october), october) == 2019);
  CHECK(water_year(day_of(at("2019-10-01"), october), october) == 2020);
  CHECK(format_day(water_year_start(2020, october)) == "2019-10-01");
  const StationClock january = clock_of(0, 0, 1);
  CHECK(water_year(day_of(at("2019-12-31"), january), january) == 2019);
  CHECK(format_day(water_year_start(2019, january)) == "2019-01-01");
  for (int month = 1; month <= 12; ++month) {
    const StationClock clock = clock_of(0, 0, month);
    const StationDay first = water_year_start(2021, clock);
    CHECK(water_year(first, clock) == 2021);
    CHECK(water_year(StationDay{first.number - 1}, clock) == 2020);
  }
}

TEST_CASE("UTC months") {
  CHECK(format_month(utc_month_of(at("2020-01-31T23:59:59.999Z"))) == "2020-01");
  CHECK(format_month(utc_month_of(at("2020-02-01"))) == "2020-02");
  const UtcMonth december = utc_month_of(at("2019-12-15"));
  CHECK(start_of(december) == at("2019-12-01"));
  CHECK(start_of(UtcMonth{december.number + 1}) == at("2020-01-01"));
}
