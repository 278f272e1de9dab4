#pragma once
// What is measured of the real stations, with its errors, as the text of field files; and the truth, as files
// apart.

#include <string>
#include <vector>

#include "stations.hpp"

namespace scenario {

struct TextFile {
  std::string name;  ///< ends in .gz where it is to be packed; `text` is never packed
  std::string text;
};

/// The officer's files: stations, gauge zero, reach, surveys, gaugings, stage of both stations, one stage
/// correction.
[[nodiscard]] std::vector<TextFile> field_files(const Site& millmark, const Site& lowbridge);
/// True flows and levels of both stations every 15 minutes, and when the bed changed. Never given to the
/// program.
[[nodiscard]] std::vector<TextFile> truth_files(const Site& millmark, const Site& lowbridge);

// The parts of field_files, each its own subject.
[[nodiscard]] TextFile station_file();
[[nodiscard]] TextFile gauge_zero_file(const Site& millmark, const Site& lowbridge);
[[nodiscard]] TextFile reach_file();
[[nodiscard]] std::vector<TextFile> survey_files(const Site& millmark, const Site& lowbridge);
[[nodiscard]] TextFile gauging_file(const Site& millmark, const Site& lowbridge);
[[nodiscard]] std::vector<TextFile> stage_files(const Site& millmark, const Site& lowbridge);
[[nodiscard]] TextFile stage_correction_file();

/// `value` with `decimals` decimals.
[[nodiscard]] std::string fixed(double value, int decimals);

}  // namespace scenario
