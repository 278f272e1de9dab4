#include <fmt/format.h>

#include "fieldfile/readers.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr Range kSlope{0, 1, false, "over 0 and at most 1 (metres of fall per metre)"};
constexpr Range kRoughness{0.005, 1, true, "Manning's n from 0.005 to 1"};
constexpr Range kChezy{1, 300, true, "Chezy's C from 1 to 300 m^(1/2)/s"};
constexpr Range kCoefficient{0.1, 3, true, "from 0.1 to 3 (1 is the theory of critical flow)"};
constexpr Range kMeander{1, 10, true, "1 (straight) or more, at most 10"};

const Words kControls{"section", "channel", "overbank"};
const Words kLaws{"manning", "chezy", "critical"};

/// A number that the flow law needs, or must not have.
std::optional<double> law_number(Row& row, const char* column, const Range& range, bool needed, FlowLaw law) {
  const auto value = row.number(column, range);
  if (needed && row.blank(column)) {
    row.fault(column, fmt::format("flow law {} needs {}", word(law), column), range.expected);
  }
  if (!needed && !row.blank(column)) {
    row.fault(column, fmt::format("flow law {} does not use {}", word(law), column),
              "a blank field, or the flow law that uses it");
  }
  return value;
}

void read_law(Row& row, ReachRow& reach) {
  const auto law = row.word("flow_law", kLaws, true);
  if (!law) return;
  reach.law = static_cast<FlowLaw>(*law);
  const bool friction = reach.law != FlowLaw::critical;
  reach.slope = law_number(row, "slope", kSlope, friction, reach.law);
  reach.roughness_n = law_number(row, "roughness_n", kRoughness, reach.law == FlowLaw::manning, reach.law);
  reach.chezy_c = law_number(row, "chezy_c", kChezy, reach.law == FlowLaw::chezy, reach.law);
  reach.coefficient = law_number(row, "coefficient", kCoefficient, !friction, reach.law);
  reach.meander_factor = row.number("meander_factor", kMeander).value_or(1);
  if (!friction && reach.meander_factor != 1) {
    row.fault("meander_factor", "flow law critical does not use meander_factor", "a blank field, or 1");
  }
}

void read_range(Row& row, ReachRow& reach) {
  reach.level_from_m = row.number("level_from", kElevation);
  reach.level_to_m = row.number("level_to", kElevation);
  if (reach.level_from_m && reach.level_to_m && *reach.level_to_m <= *reach.level_from_m) {
    row.fault("level_to",
              fmt::format("{} is not above {}: {}", row.title("level_to"), row.title("level_from"),
                          row.text("level_to")),
              "a level above the lower end of the range");
  }
}

}  // namespace

void read_reaches(Table& table, const KnownStations& known, ParsedFile& file) {
  Row row;
  while (table.next(row)) {
    Located<ReachRow> located;
    ReachRow& reach = located.record;
    reach.station = row.station(known);
    reach.valid_from = row.time("valid_from", known).value_or(Instant{});
    if (const auto control = row.word("control", kControls, true))
      reach.control = static_cast<ControlKind>(*control);
    reach.cross_section = row.name("cross_section");
    reach.part = row.name_or("part", "main");
    located.place = row.place(row.blank("part") ? "cross_section" : "part");
    located.withdrawn = row.withdrawn();
    if (!located.withdrawn) {
      read_law(row, reach);
      read_range(row, reach);
      reach.scale_sd_pct = row.number("scale_sd_pct", kPercent);
      reach.remark = row.text("remark");
    }
    if (row.ok()) file.reaches.push_back(std::move(located));
  }
}

}  // namespace scourbook::fieldfile
