#include <fmt/format.h>

#include <cmath>

#include "fieldfile/readers.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr Range kLatitude{-90, 90, true, "from -90 to 90 degrees, north positive"};
constexpr Range kLongitude{-180, 180, true, "from -180 to 180 degrees, east positive"};
constexpr Range kMonth{1, 12, true, "a whole number from 1 to 12"};

void read_offset(Row& row, StationClock& clock) {
  constexpr const char* kExpected = "the fixed offset from UTC, such as +01:00, -03:30 or Z";
  const std::string_view text = row.text("utc_offset");
  if (text.empty()) return row.fault("utc_offset", "utc_offset is missing", kExpected);
  const auto offset = parse_offset(text);
  if (!offset) return row.fault("utc_offset", "utc_offset is no offset: " + in_quotes(text), kExpected);
  clock.offset = *offset;
}

/// Start of the station's day, "09:00".
void read_day_start(Row& row, StationClock& clock) {
  const std::string_view text = row.text("day_start");
  if (text.empty()) return;
  // An offset of the same form, without a sign, is a time of day below 14:00; so are the hours above it.
  const auto digit = [&](std::size_t i) { return text[i] >= '0' && text[i] <= '9' ? text[i] - '0' : -1; };
  bool good = text.size() == 5 && text[2] == ':';
  for (const std::size_t i : {0u, 1u, 3u, 4u}) good = good && digit(i) >= 0;
  const int hour = good ? digit(0) * 10 + digit(1) : 24;
  const int minute = good ? digit(3) * 10 + digit(4) : 60;
  if (hour > 23 || minute > 59) {
    return row.fault("day_start", "day_start is no time of day: " + in_quotes(text),
                     "hh:mm, from 00:00 to 23:59");
  }
  clock.day_start = std::chrono::minutes(hour * 60 + minute);
}

void read_water_year(Row& row, StationClock& clock) {
  const auto month = row.number("water_year_month", kMonth);
  if (!month) return;
  if (*month != std::floor(*month)) {
    return row.fault("water_year_month",
                     fmt::format("water_year_month is no whole number: {}", row.text("water_year_month")),
                     kMonth.expected);
  }
  clock.water_year_month = static_cast<int>(*month);
}

}  // namespace

void read_stations(Table& table, KnownStations& known, ParsedFile& file) {
  Row row;
  while (table.next(row)) {
    Located<Station> located;
    Station& station = located.record;
    station.id = row.name("station");
    located.place = row.place("station");
    located.withdrawn = row.withdrawn();
    if (!located.withdrawn) {
      station.name = row.text("name");
      if (station.name.empty()) row.fault("name", "name is missing", "the name of the station");
      station.river = row.text("river");
      read_offset(row, station.clock);
      read_day_start(row, station.clock);
      read_water_year(row, station.clock);
      station.latitude = row.number("latitude", kLatitude);
      station.longitude = row.number("longitude", kLongitude);
      station.remark = row.text("remark");
    }
    // Even a faulty row makes its station known: the other files are then judged without a second finding.
    if (!station.id.empty() && !located.withdrawn) {
      known[station.id].offset = row.ok() ? std::optional(station.clock.offset) : std::nullopt;
    }
    if (row.ok()) file.stations.push_back(std::move(located));
  }
}

}  // namespace scourbook::fieldfile
