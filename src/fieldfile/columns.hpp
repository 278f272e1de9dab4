#pragma once
// The kinds of field file, their columns, and the units that column names may end in.

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace scourbook::fieldfile {

/// In the order in which they depend on each other: a later kind may rest on an earlier one of the same take.
enum class Kind { station, gauge_zero, reach, survey, gauging, stage_correction, stage };

/// What a column measures; none for text, times, words, percentages and pure numbers.
enum class Measure { none, length, discharge, area, velocity };

struct Unit {
  std::string_view suffix;  ///< "m", "ft" ...: the name's end behind its last underscore
  Measure measure;
  double to_si;  ///< exact: the international foot is 0.3048 m
  bool feet;
};

struct Column {
  std::string_view name;  ///< without its unit
  Measure measure = Measure::none;
  bool required = true;
};

struct KindOfFile {
  Kind kind;
  std::string_view name;  ///< "gauge zero": as the book keeps it
  std::vector<Column> columns;
};

/// Every kind, in the order of Kind.
[[nodiscard]] const std::vector<KindOfFile>& kinds();
[[nodiscard]] const KindOfFile& columns_of(Kind kind);
[[nodiscard]] std::string_view word(Kind kind);

[[nodiscard]] const std::vector<Unit>& units();
[[nodiscard]] std::optional<Unit> find_unit(std::string_view suffix);
/// "discharge_m3s or discharge_ft3s": the names a column may have; the name itself where it has no unit.
[[nodiscard]] std::string names_of(const Column& column);
/// The column's name in SI: "discharge_m3s".
[[nodiscard]] std::string si_name(const Column& column);
/// "station, time, stage_m, [quality]".
[[nodiscard]] std::string list_columns(const KindOfFile& kind);

}  // namespace scourbook::fieldfile
