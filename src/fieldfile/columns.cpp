#include "fieldfile/columns.hpp"

#include <fmt/format.h>

namespace scourbook::fieldfile {
namespace {

constexpr bool kOptional = false;

std::vector<KindOfFile> make_kinds() {
  using M = Measure;
  // `withdrawn` belongs to corrections: yes takes a held record out of use.
  const Column remark{"remark", M::none, kOptional};
  const Column withdrawn{"withdrawn", M::none, kOptional};
  return {
      {Kind::station,
       "station",
       {{"station"},
        {"name"},
        {"river", M::none, kOptional},
        {"utc_offset"},
        {"day_start", M::none, kOptional},
        {"water_year_month", M::none, kOptional},
        {"latitude", M::none, kOptional},
        {"longitude", M::none, kOptional},
        remark,
        withdrawn}},
      {Kind::gauge_zero,
       "gauge zero",
       {{"station"}, {"valid_from"}, {"gauge_zero", M::length}, remark, withdrawn}},
      {Kind::reach,
       "reach",
       {{"station"},
        {"valid_from"},
        {"control"},
        {"cross_section"},
        {"part", M::none, kOptional},
        {"flow_law"},
        {"slope", M::none, kOptional},
        {"roughness_n", M::none, kOptional},
        {"chezy_c", M::none, kOptional},
        {"coefficient", M::none, kOptional},
        {"meander_factor", M::none, kOptional},
        {"scale_sd_pct", M::none, kOptional},
        {"level_from", M::length, kOptional},
        {"level_to", M::length, kOptional},
        remark,
        withdrawn}},
      {Kind::survey,
       "survey",
       {{"station"},
        {"survey"},
        {"surveyed_at"},
        {"cross_section"},
        {"part", M::none, kOptional},
        {"distance", M::length},
        {"elevation", M::length},
        {"level_uncertainty", M::length, kOptional},
        {"mark", M::none, kOptional},
        remark,
        withdrawn}},
      {Kind::gauging,
       "gauging",
       {{"station"},
        {"gauging"},
        {"start"},
        {"end", M::none, kOptional},
        {"stage", M::length},
        {"discharge", M::discharge},
        {"uncertainty_pct", M::none, kOptional},
        {"stage_uncertainty", M::length, kOptional},
        {"stage_end", M::length, kOptional},
        {"method", M::none, kOptional},
        {"area", M::area, kOptional},
        {"width", M::length, kOptional},
        {"velocity", M::velocity, kOptional},
        {"quality", M::none, kOptional},
        remark,
        withdrawn}},
      {Kind::stage_correction,
       "stage correction",
       {{"station"},
        {"from"},
        {"until"},
        {"add_at_from", M::length},
        {"add_at_until", M::length},
        remark,
        withdrawn}},
      {Kind::stage, "stage", {{"station"}, {"time"}, {"stage", M::length}, {"quality", M::none, kOptional}}},
  };
}

}  // namespace

const std::vector<KindOfFile>& kinds() {
  static const std::vector<KindOfFile> all = make_kinds();
  return all;
}

const KindOfFile& columns_of(Kind kind) {
  return kinds().at(static_cast<std::size_t>(kind));
}
std::string_view word(Kind kind) {
  return columns_of(kind).name;
}

const std::vector<Unit>& units() {
  // 0.3048^2 and 0.3048^3 are exact in these decimals. The SI unit of a measure stands before its other one.
  static const std::vector<Unit> all{
      {"m", Measure::length, 1, false},      {"ft", Measure::length, 0.3048, true},
      {"m3s", Measure::discharge, 1, false}, {"ft3s", Measure::discharge, 0.028316846592, true},
      {"m2", Measure::area, 1, false},       {"ft2", Measure::area, 0.09290304, true},
      {"ms", Measure::velocity, 1, false},   {"fts", Measure::velocity, 0.3048, true},
  };
  return all;
}

std::optional<Unit> find_unit(std::string_view suffix) {
  for (const Unit& unit : units()) {
    if (unit.suffix == suffix) return unit;
  }
  return {};
}

std::string names_of(const Column& column) {
  if (column.measure == Measure::none) return std::string(column.name);
  std::string names;
  for (const Unit& unit : units()) {
    if (unit.measure != column.measure) continue;
    if (!names.empty()) names += " or ";
    names += fmt::format("{}_{}", column.name, unit.suffix);
  }
  return names;
}

std::string si_name(const Column& column) {
  const std::string names = names_of(column);
  return names.substr(0, names.find(' '));
}

std::string list_columns(const KindOfFile& kind) {
  std::string list;
  for (const Column& column : kind.columns) {
    if (column.name == "withdrawn") continue;
    if (!list.empty()) list += ", ";
    list += column.required ? si_name(column) : fmt::format("[{}]", si_name(column));
  }
  return list;
}

}  // namespace scourbook::fieldfile
