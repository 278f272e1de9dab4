#pragma once
// A book with one station and hand-made curves, written through the store's own interface.

#include <unistd.h>

#include <filesystem>
#include <string>
#include <vector>

#include "store/book.hpp"

namespace station_book {

using namespace scourbook;

/// A path that is removed when the test ends, with SQLite's files beside it.
class TemporaryPath {
 public:
  explicit TemporaryPath(const std::string& name)
      : path_((std::filesystem::temp_directory_path() /
               ("scourbook-" + name + "-" + std::to_string(::getpid()) + ".scourbook"))
                  .string()) {
    remove();
  }
  ~TemporaryPath() { remove(); }
  TemporaryPath(const TemporaryPath&) = delete;
  TemporaryPath& operator=(const TemporaryPath&) = delete;
  [[nodiscard]] const std::string& text() const { return path_; }

 private:
  void remove() const {
    std::error_code ignored;
    for (const char* end : {"", "-wal", "-shm", "-journal"}) std::filesystem::remove(path_ + end, ignored);
  }
  std::string path_;
};

inline const std::string kStation = "R-1";

inline Instant at(const std::string& text) {
  return parse_time(text, UtcOffset{}).time;
}
inline store::ActHead head(const std::string& reason) {
  return {"records officer A", kStation, reason, "test"};
}

/// A control with its effective coefficients.
inline ControlCoefficients control(ControlKind kind, double h0_m, double exponent, double flow_scale) {
  ControlCoefficients c;
  c.kind = kind;
  c.name = std::string(word(kind));
  c.cross_section = "CS1";
  c.part = kind == ControlKind::overbank ? "left" : "main";
  c.law = kind == ControlKind::section ? FlowLaw::critical : FlowLaw::manning;
  c.velocity_scale = 1;
  c.velocity_exponent = kind == ControlKind::section ? 0.5 : 2.0 / 3;
  c.survey = "S1";
  c.lowest_point_m = c.surveyed_h0_m = c.h0_m = h0_m;
  c.surveyed_c = c.area_exponent = exponent - c.velocity_exponent;
  c.area_coefficient = 1;
  c.section_coefficient = c.flow_scale = flow_scale;
  c.exponent = exponent;
  c.range_from_m = h0_m;
  c.range_to_m = h0_m + 3;
  return c;
}

inline RatingCurve curve(std::vector<ControlCoefficients> controls) {
  RatingCurve made;
  made.station = kStation;
  made.survey = "S1";
  made.from = at("2019-01-01T00:00Z");
  made.controls = std::move(controls);
  made.bands = {{99.5, 0.2}, {100.5, 0.06}, {101.5, 0.04}, {104, 0.15}};
  made.surveyed_top_m = 1e3;
  return made;
}

inline Period period(std::optional<int> curve, const std::string& from, const std::string& until,
                     Millis blend = {}) {
  Period made;
  made.from = at(from);
  if (!until.empty()) made.until = at(until);
  made.curve = curve;
  made.blend = blend;
  return made;
}

/// Station, survey and reach rows; the curves that follow are pinned to them.
inline void add_ground(store::Book& book, const StationClock& clock, const std::vector<GaugeZeroRow>& zeros) {
  auto writer = book.begin(head("ground"));
  const auto file = writer.add_file("ground.csv", 1, std::string(64, '0'), "station");
  Station station;
  station.id = kStation;
  station.name = "Testing Weir";
  station.clock = clock;
  writer.add(station, {file, 1});
  for (const auto& zero : zeros) writer.add(zero, {file, 2});
  Survey survey;
  survey.station = kStation;
  survey.id = "S1";
  survey.surveyed_at = at("2019-01-01T00:00Z");
  survey.points = {{"CS1", "main", 0, 105, ""}, {"CS1", "main", 10, 100, ""}, {"CS1", "main", 20, 105, ""}};
  writer.add(survey, {file, 3}, {3, 4, 5});
  for (const auto kind : {ControlKind::section, ControlKind::channel, ControlKind::overbank}) {
    ReachRow row;
    row.station = kStation;
    row.valid_from = at("2019-01-01T00:00Z");
    row.control = kind;
    row.cross_section = "CS1";
    row.part = kind == ControlKind::overbank ? "left" : "main";
    row.law = kind == ControlKind::section ? FlowLaw::critical : FlowLaw::manning;
    if (kind == ControlKind::section) {
      row.coefficient = 1;
    } else {
      row.slope = 0.001;
      row.roughness_n = 0.03;
    }
    writer.add(row, {file, 6});
  }
  writer.commit();
}

/// Stores the curves in order, numbers from 1, pinned to the reach rows of add_ground.
inline void add_curves(store::Book& book, std::vector<RatingCurve> curves) {
  const auto rows = book.reach_rows(kStation);
  auto writer = book.begin(head("curves"));
  for (auto& made : curves) {
    for (const auto& c : made.controls) {
      for (const auto& row : rows) {
        if (row.stored.value.control == c.kind) made.reach.push_back({row.row, row.stored.version});
      }
    }
    (void)writer.add_curve(made);
  }
  writer.commit();
}

inline void add_edition(store::Book& book, const std::vector<Period>& periods) {
  Edition edition;
  edition.station = kStation;
  edition.periods = periods;
  auto writer = book.begin(head("edition"));
  (void)writer.add_edition(edition);
  writer.commit();
}

inline GaugeZeroRow zero(const std::string& from, double metres) {
  return {kStation, at(from), GaugeZero::from_metres(metres), ""};
}

/// Readings in mm.
inline void add_stage(store::Book& book, std::vector<store::StageReading> readings) {
  auto writer = book.begin(head("stage"));
  const auto file = writer.add_file("stage.csv", 1, std::string(64, '0'), "stage");
  (void)writer.add_stage({kStation, store::StageUnit::metre, 3, std::move(readings)}, file);
  writer.commit();
}

}  // namespace station_book
