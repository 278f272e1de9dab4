#include "terms/time.hpp"

#include <fmt/format.h>

#include <random>
#include <sstream>

using namespace scourbook;
using std::chrono::minutes;

namespace {

constexpr UtcOffset kPlusOne{minutes(60)};

Instant at(const std::string& text) {
  const ParsedTime parsed = parse_time(text, UtcOffset{});
  REQUIRE(parsed.ok());
  return parsed.time;
}

TimeFault fault_of(std::string_view text) {
  return parse_time(text, UtcOffset{}).fault;
}

}  // namespace

TEST_CASE("parse_time agrees with Hinnant's date library on random times and offsets") {
  std::mt19937_64 random(20240501);
  std::uniform_int_distribution<std::int64_t> ms(-9'246'182'400'000,
                                                 9'214'646'399'999);  // years 1677 to 2261
  std::uniform_int_distribution<int> offset(-14 * 60, 14 * 60);
  for (int i = 0; i < 20'000; ++i) {
    const Instant time = from_ms(ms(random));
    const UtcOffset zone{minutes(offset(random))};
    const Instant local = time + zone.minutes;
    // The reference writes the local text and reads it back with its own parser.
    std::string text = date::format("%FT%T", local);
    std::istringstream in(text);
    Instant reread;
    in >> date::parse("%FT%T", reread);
    REQUIRE(reread == local);
    const int year = static_cast<int>(date::year_month_day(date::floor<date::days>(local)).year());
    if (year < 1677 || year > 2261) continue;
    CHECK(parse_time(text, zone).time == time);
    CHECK(parse_time(text + format_offset(zone), std::nullopt).time == time);
    CHECK(parse_time(format_time(time, zone), std::nullopt).time == time);
  }
}

TEST_CASE("parse_time accepts the written forms") {
  const Instant expected = from_ms(1'580'451'300'000);  // 2020-01-31 06:15 UTC
  CHECK(at("2020-01-31T06:15") == expected);
  CHECK(at("2020-01-31 06:15:00") == expected);
  CHECK(at("2020-01-31T06:15:00.000Z") == expected);
  CHECK(at("2020-01-31T07:15+01:00") == expected);
  CHECK(at("2020-01-31T02:45-03:30") == expected);
  CHECK(at("2020-01-31T06:15:00.25") == expected + Millis(250));
  CHECK(at("2020-01-31T06:15:00.250000") == expected + Millis(250));
  CHECK(at("2020-01-31") == expected - std::chrono::hours(6) - minutes(15));
  CHECK(parse_time("2020-01-31T07:15", kPlusOne).time == expected);
}

TEST_CASE("the offset in the text wins over the station's, and is said") {
  const ParsedTime own = parse_time("2020-01-31T06:15Z", kPlusOne);
  CHECK(own.time == from_ms(1'580'451'300'000));
  CHECK(own.has_offset);
  CHECK_FALSE(parse_time("2020-01-31T06:15", kPlusOne).has_offset);
  CHECK(parse_time("2020-01-31T06:15", std::nullopt).fault == TimeFault::no_offset);
}

TEST_CASE("parse_time names what is wrong") {
  for (const char* text :
       {"", "2020", "31.01.2020 06:15", "2020/01/31", "2020-1-31", "2020-01-31T", "2020-01-31T6:15",
        "2020-01-31T06.15", "2020-01-31T06:15:", "2020-01-31T06:15:00.", "2020-01-31T06:15:00.0001",
        "2020-01-31T06:15+1", "2020-01-31T06:15+15:00", "2020-01-31T06:15ZZ", "2020-01-31Z", "2020-01-31T06",
        "2020-01-31t06:15", "20x0-01-31", "2020-01-31T06:15:00.1234567890"}) {
    INFO(text);
    CHECK(fault_of(text) == TimeFault::not_a_time);
  }
  for (const char* text : {"2019-02-29", "2020-02-30T00:00", "1900-02-29", "2020-13-01", "2020-00-10",
                           "2020-04-31", "2020-01-00", "1676-12-31", "2262-01-01"}) {
    INFO(text);
    CHECK(fault_of(text) == TimeFault::no_such_date);
  }
  for (const char* text :
       {"2020-01-01T24:00", "2020-01-01T25:00", "2020-01-01T10:60", "2020-01-01T10:10:60"}) {
    INFO(text);
    CHECK(fault_of(text) == TimeFault::no_such_hour);
  }
  CHECK(fault_of("2000-02-29") == TimeFault::none);
}

TEST_CASE("times and offsets are written in full") {
  const Instant time = from_ms(1'580'451'300'000);
  CHECK(format_time(time, {}) == "2020-01-31T06:15:00Z");
  CHECK(format_time(time, kPlusOne) == "2020-01-31T07:15:00+01:00");
  CHECK(format_time(time + Millis(7), UtcOffset{minutes(-210)}) == "2020-01-31T02:45:00.007-03:30");
  CHECK(format_time(from_ms(-1), {}) == "1969-12-31T23:59:59.999Z");
}

TEST_CASE("offsets read back as written, and nothing else is one") {
  for (int m = -840; m <= 840; ++m) {
    const UtcOffset offset{minutes(m)};
    CHECK(parse_offset(format_offset(offset)) == offset);
  }
  for (const char* text :
       {"", "z", "01:00", "+1:00", "+01", "+0100", "+14:01", "-15:00", "+01:60", "+01:0x", "UTC"}) {
    INFO(text);
    CHECK_FALSE(parse_offset(text).has_value());
  }
}

TEST_CASE("every fault has words") {
  CHECK(std::string(explain(TimeFault::not_a_time)) == "not a time");
  CHECK(std::string(explain(TimeFault::no_such_date)) == "there is no such date");
  CHECK(std::string(explain(TimeFault::no_such_hour)) == "there is no such time of day");
  CHECK(std::string(explain(TimeFault::no_offset)) == "a time without an offset from UTC");
}
