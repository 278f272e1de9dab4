#pragma once
// An ensemble of synthetic stations in the format of field files, with the true flow after a change of the
// channel.

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <cstdio>
#include <map>
#include <string>
#include <vector>

#include "fieldfile/parsed.hpp"
#include "rederivation/derive.hpp"

namespace ensemble {

using namespace scourbook;

/// One point of the truth.
struct TruePoint {
  std::string band;  ///< "low", "in-bank" or "over-bank"
  double level_m = 0;
  double discharge_m3s = 0;
};

struct EnsembleStation {
  std::string id;
  std::vector<rederivation::ReachInput> reach;
  std::vector<Survey> surveys;
  std::vector<rederivation::GaugingAtLevel> gaugings;
  std::vector<TruePoint> truth;
};

/// Everything in a file, unpacked.
inline std::string text_of(const std::string& path) {
  fieldfile::FileBytes bytes(path);
  std::string text(1 << 20, ' ');
  std::size_t size = 0;
  while (const std::size_t got = bytes.read(text.data() + size, text.size() - size)) size += got;
  REQUIRE_FALSE(bytes.fault().any());
  text.resize(size);
  return text;
}

using Fields = std::vector<std::vector<std::string>>;

/// The fields of a file without quotes.
inline Fields fields_of(const std::string& text) {
  Fields rows(1);
  std::string field;
  for (const char c : text) {
    if (c == ',' || c == '\n') {
      rows.back().push_back(field);
      field.clear();
      if (c == '\n') rows.emplace_back();
    } else {
      field += c;
    }
  }
  rows.pop_back();
  return rows;
}

/// The same file with every length in feet and every discharge in cubic feet a second.
inline std::string in_feet(const std::string& text) {
  Fields rows = fields_of(text);
  std::string out;
  std::vector<double> to_feet;
  for (std::string& name : rows[0]) {
    const auto unit = name.size() > 5 ? name.rfind('_') : std::string::npos;
    const std::string suffix = unit == std::string::npos ? "" : name.substr(unit);
    to_feet.push_back(suffix == "_m" ? kMetresPerFoot : suffix == "_m3s" ? std::pow(kMetresPerFoot, 3) : 0);
    if (suffix == "_m") name = name.substr(0, unit) + "_ft";
    if (suffix == "_m3s") name = name.substr(0, unit) + "_ft3s";
  }
  for (std::size_t r = 0; r < rows.size(); ++r) {
    for (std::size_t k = 0; k < rows[r].size(); ++k) {
      std::string& field = rows[r][k];
      if (r > 0 && to_feet[k] > 0 && !field.empty()) {
        char number[32];
        std::snprintf(number, sizeof number, "%.15g", std::stod(field) / to_feet[k]);
        field = number;
      }
      out += (k > 0 ? "," : "") + field;
    }
    out += '\n';
  }
  return out;
}

enum class Units { si, feet };

inline fieldfile::ParsedFile read(const std::string& path, fieldfile::KnownStations& known, Units units) {
  const std::string text = units == Units::feet ? in_feet(text_of(path)) : text_of(path);
  fieldfile::MemoryBytes bytes(text);
  auto file = fieldfile::read_records(bytes, path, known);
  INFO(describe(file.findings));
  REQUIRE(file.findings.empty());
  return file;
}

/// The stations of a folder, by id. Gauge zeros are constant.
inline std::vector<EnsembleStation> read_ensemble(const std::string& folder, Units units = Units::si) {
  fieldfile::KnownStations known;
  std::map<std::string, EnsembleStation> stations;
  std::map<std::string, double> zero_m;
  for (const auto& row : read(folder + "/station.csv", known, units).stations)
    stations[row.record.id].id = row.record.id;
  for (const auto& row : read(folder + "/zero.csv", known, units).gauge_zeros) {
    zero_m[row.record.station] = row.record.zero.metres();
  }
  for (const auto& row : read(folder + "/reach.csv", known, units).reaches) {
    stations.at(row.record.station).reach.push_back({row.record, {}});
  }
  for (const auto& row : read(folder + "/survey.csv.gz", known, units).surveys) {
    stations.at(row.record.station).surveys.push_back(row.record);
  }
  for (const auto& row : read(folder + "/gauging.csv.gz", known, units).gaugings) {
    const Gauging& gauging = row.record;
    const double level_m = gauging.mean_stage().metres() + zero_m.at(gauging.station);
    stations.at(gauging.station).gaugings.push_back({gauging, 1, level_m});
  }
  const Fields truth = fields_of(text_of(folder + "/truth.csv"));
  REQUIRE(truth.front() == std::vector<std::string>{"station", "band", "stage_m", "discharge_m3s"});
  for (std::size_t i = 1; i < truth.size(); ++i) {
    const auto& row = truth[i];
    stations.at(row[0]).truth.push_back({row[1], std::stod(row[2]) + zero_m.at(row[0]), std::stod(row[3])});
  }
  std::vector<EnsembleStation> all;
  for (auto& [id, station] : stations) all.push_back(std::move(station));
  return all;
}

/// The derivation of a station's first (0) or second (1) period; a parent makes it a descending one.
inline rederivation::Input input_of(const EnsembleStation& station, std::size_t period,
                                    const RatingCurve* parent = nullptr) {
  rederivation::Input input;
  input.station = station.id;
  input.survey = station.surveys.at(period);
  input.reach = station.reach;
  input.from = station.surveys.at(period).surveyed_at;
  for (const auto& offered : station.gaugings) {
    const bool late = offered.gauging.middle() >= station.surveys.at(1).surveyed_at;
    if (late == (period == 1)) input.gaugings.push_back(offered);
  }
  if (parent != nullptr) input.parent = rederivation::Parent{*parent, station.reach, station.surveys.at(0)};
  return input;
}

inline double quantile(std::vector<double> values, double share) {
  std::sort(values.begin(), values.end());
  const double at = share * static_cast<double>(values.size() - 1);
  const auto low = static_cast<std::size_t>(at);
  const std::size_t high = std::min(low + 1, values.size() - 1);
  return values[low] + (at - static_cast<double>(low)) * (values[high] - values[low]);
}

}  // namespace ensemble
