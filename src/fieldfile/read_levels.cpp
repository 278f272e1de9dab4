// Gauge zeros and stage corrections.
#include <fmt/format.h>

#include "fieldfile/readers.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr Range kCorrection{-100, 100, true, "from -100 to 100 m"};

}  // namespace

void read_gauge_zeros(Table& table, const KnownStations& known, ParsedFile& file) {
  Row row;
  while (table.next(row)) {
    Located<GaugeZeroRow> located;
    GaugeZeroRow& zero = located.record;
    zero.station = row.station(known);
    zero.valid_from = row.time("valid_from", known).value_or(Instant{});
    located.place = row.place("valid_from");
    located.withdrawn = row.withdrawn();
    if (!located.withdrawn) {
      zero.zero = GaugeZero::from_metres(row.number("gauge_zero", kElevation, true).value_or(0));
      zero.remark = row.text("remark");
    }
    if (row.ok()) file.gauge_zeros.push_back(std::move(located));
  }
}

void read_corrections(Table& table, const KnownStations& known, ParsedFile& file) {
  Row row;
  while (table.next(row)) {
    Located<StageCorrection> located;
    StageCorrection& correction = located.record;
    correction.station = row.station(known);
    const auto from = row.time("from", known);
    const auto until = row.time("until", known);
    if (from && until && *until <= *from) {
      row.fault("until", fmt::format("until is not after from: {}", in_quotes(row.text("until"))),
                "a time later than from");
    }
    correction.from = from.value_or(Instant{});
    correction.until = until.value_or(Instant{});
    located.place = row.place("from");
    located.withdrawn = row.withdrawn();
    if (!located.withdrawn) {
      correction.add_at_from =
          HeightChange::from_metres(row.number("add_at_from", kCorrection, true).value_or(0));
      correction.add_at_until =
          HeightChange::from_metres(row.number("add_at_until", kCorrection, true).value_or(0));
      correction.remark = row.text("remark");
    }
    if (row.ok()) file.corrections.push_back(std::move(located));
  }
}

}  // namespace scourbook::fieldfile
