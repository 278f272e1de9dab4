#include <fmt/format.h>

#include "fieldfile/readers.hpp"
#include "terms/nearest.hpp"

namespace scourbook::fieldfile {
namespace {

// The largest flow ever gauged on any river is below 0.4 million m3/s.
constexpr Range kDischarge{0, 1e6, true, "0 or more, at most 1 million m3/s"};
constexpr Range kArea{0, 1e6, true, "0 or more, at most 1 million m2"};
constexpr Range kVelocity{-20, 20, true, "from -20 to 20 m/s"};
const std::string kZeroFlowLevel = "zero-flow-level";

void read_times(Row& row, const KnownStations& known, Gauging& gauging) {
  gauging.start = row.time("start", known).value_or(Instant{});
  gauging.end = row.time("end", known, false);
  if (gauging.end && row.ok() && *gauging.end < gauging.start) {
    row.fault("end", fmt::format("end is before start: {}", in_quotes(row.text("end"))),
              "a time not before start");
  }
}

/// Any method is kept as written, but a slip in the one that the program acts on must not pass.
void read_method(Row& row, Gauging& gauging) {
  gauging.method = row.text("method");
  if (gauging.method != kZeroFlowLevel && !nearest_word(gauging.method, {kZeroFlowLevel}).empty()) {
    row.fault("method", "method is not a known word: " + in_quotes(gauging.method),
              "zero-flow-level, or any other method", "write zero-flow-level if that is meant");
  }
}

void read_discharge(Row& row, Gauging& gauging) {
  const bool must = !gauging.is_zero_flow_level();
  gauging.discharge = Discharge::from_m3s(row.number("discharge", kDischarge, must).value_or(0));
  if (gauging.is_zero_flow_level() && gauging.discharge.m3s() != 0) {
    row.fault(
        "discharge",
        fmt::format("{} is not zero at a zero-flow level: {}", row.title("discharge"), row.text("discharge")),
        "0 or blank where method is zero-flow-level");
  }
}

void read_values(Row& row, Gauging& gauging) {
  gauging.stage = Stage::from_metres(row.number("stage", kElevation, true).value_or(0));
  if (const auto end = row.number("stage_end", kElevation)) gauging.stage_end = Stage::from_metres(*end);
  read_method(row, gauging);
  read_discharge(row, gauging);
  gauging.uncertainty_pct = row.number("uncertainty_pct", kPercent);
  gauging.stage_uncertainty_m = row.number("stage_uncertainty", kHeightUncertainty);
  gauging.area_m2 = row.number("area", kArea);
  gauging.width_m = row.number("width", kLength);
  gauging.velocity_ms = row.number("velocity", kVelocity);
  if (const auto quality = row.word("quality", quality_words(), false)) {
    gauging.quality = static_cast<Quality>(*quality);
  }
  gauging.remark = row.text("remark");
}

}  // namespace

void read_gaugings(Table& table, const KnownStations& known, ParsedFile& file) {
  Row row;
  while (table.next(row)) {
    Located<Gauging> located;
    Gauging& gauging = located.record;
    gauging.station = row.station(known);
    gauging.id = row.name("gauging");
    located.place = row.place("gauging");
    located.withdrawn = row.withdrawn();
    if (!located.withdrawn) {
      read_times(row, known, gauging);
      read_values(row, gauging);
    }
    if (row.ok()) file.gaugings.push_back(std::move(located));
  }
}

}  // namespace scourbook::fieldfile
