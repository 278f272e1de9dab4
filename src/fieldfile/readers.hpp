#pragma once
// One reader for each kind of file: rows of a table to records, every broken rule a finding of the table.

#include "fieldfile/parsed.hpp"
#include "fieldfile/table.hpp"

namespace scourbook::fieldfile {

/// Adds each station to `known`, with its offset where its row is sound.
void read_stations(Table& table, KnownStations& known, ParsedFile& file);
void read_gauge_zeros(Table& table, const KnownStations& known, ParsedFile& file);
void read_reaches(Table& table, const KnownStations& known, ParsedFile& file);
void read_surveys(Table& table, const KnownStations& known, ParsedFile& file);
void read_gaugings(Table& table, const KnownStations& known, ParsedFile& file);
void read_corrections(Table& table, const KnownStations& known, ParsedFile& file);
void read_stage(Table& table, const KnownStations& known, bool plain_lines, ParsedFile& file);

// Ranges that several kinds share. Wide enough for every river, narrow enough to stop a slip of units or
// columns.
inline constexpr Range kElevation{-1000, 10'000, true, "from -1000 to 10000 m"};
inline constexpr Range kLength{0, 1e6, true, "0 or more, at most 1000 km"};
inline constexpr Range kPercent{0, 1000, false, "over 0, at most 1000 %"};
inline constexpr Range kHeightUncertainty{0, 10, false, "over 0, at most 10 m"};

/// OGC quality words in the order of Quality.
[[nodiscard]] const Words& quality_words();

}  // namespace scourbook::fieldfile
