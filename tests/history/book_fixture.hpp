#pragma once
// A book of one station to ask history about, written through the store's own interface.

#include <unistd.h>

#include <filesystem>
#include <string>
#include <vector>

#include "store/book.hpp"

namespace book_fixture {

using namespace scourbook;

inline Instant at(const std::string& text) {
  return parse_time(text, UtcOffset{}).time;
}

inline Gauging gauging(const std::string& id, const std::string& start, double stage_m, double m3s) {
  Gauging made;
  made.station = "H-1";
  made.id = id;
  made.start = at(start);
  made.stage = Stage::from_metres(stage_m);
  made.discharge = Discharge::from_m3s(m3s);
  return made;
}

inline GaugeZeroRow zero(const std::string& from, double metres) {
  return {"H-1", at(from), GaugeZero::from_metres(metres), ""};
}

inline ReachRow reach(const std::string& from, ControlKind kind, const std::string& cross_section,
                      const std::string& part = "main") {
  ReachRow row;
  row.station = "H-1";
  row.valid_from = at(from);
  row.control = kind;
  row.cross_section = cross_section;
  row.part = part;
  row.slope = 0.001;
  row.roughness_n = 0.03;
  return row;
}

inline Survey survey(const std::string& id, const std::string& time) {
  Survey made;
  made.station = "H-1";
  made.id = id;
  made.surveyed_at = at(time);
  made.points = {{"CS1", "main", 0, 105, ""}, {"CS1", "main", 10, 100, ""}, {"CS1", "main", 20, 105, ""}};
  return made;
}

inline Period period(std::optional<int> curve, const std::string& from, const std::string& until) {
  Period made;
  made.from = at(from);
  if (!until.empty()) made.until = at(until);
  made.curve = curve;
  return made;
}

/// A book in a file of its own that goes with it.
class Fixture {
 public:
  Fixture() : path_(new_path()), book(store::Book::create(path_, head("new"))) {
    Station station;
    station.id = "H-1";
    station.name = "Historic Bridge";
    station.clock.offset.minutes = std::chrono::minutes(60);
    add(station);
  }
  ~Fixture() {
    std::error_code ignored;
    for (const char* end : {"", "-wal", "-shm"}) std::filesystem::remove(path_ + end, ignored);
  }
  Fixture(const Fixture&) = delete;
  Fixture& operator=(const Fixture&) = delete;

  static store::ActHead head(const std::string& reason) {
    return {"records officer A", "H-1", reason, "test"};
  }

  /// Each adds its records in one act, whose number it returns.
  template <class Record>
  std::int64_t add(const Record& record, bool correct = false, bool withdrawn = false) {
    auto writer = book.begin(head("record"));
    const auto file = writer.add_file("records.csv", 1, std::string(64, '0'), "gauging");
    if constexpr (std::is_same_v<Record, Survey>) {
      writer.add(record, {file, 2}, {2, 3, 4}, correct, withdrawn);
    } else {
      writer.add(record, {file, 2}, correct, withdrawn);
    }
    return writer.commit().number;
  }
  std::int64_t add(const std::vector<Period>& periods) {
    auto writer = book.begin(head("edition"));
    Edition edition;
    edition.station = "H-1";
    edition.periods = periods;
    (void)writer.add_edition(edition);
    return writer.commit().number;
  }
  std::int64_t add_stage(const std::string& time, std::int64_t mm) {
    auto writer = book.begin(head("stage"));
    const auto file = writer.add_file("stage.csv", 1, std::string(64, '0'), "stage");
    (void)writer.add_stage({"H-1", store::StageUnit::metre, 3, {{at(time), mm, Quality::unchecked, 2}}},
                           file);
    return writer.commit().number;
  }
  /// A single-channel curve of survey S1 and the newest reach row, that used the gaugings named, as they
  /// stand now.
  int add_curve(const std::string& from, std::optional<int> parent, const std::vector<std::string>& used,
                const std::vector<std::string>& left_out = {}) {
    RatingCurve curve;
    curve.station = "H-1";
    curve.survey = "S1";
    curve.from = at(from);
    curve.parent = parent;
    ControlCoefficients channel;
    channel.name = "channel";
    channel.cross_section = "CS1";
    channel.part = "main";
    channel.survey = "S1";
    channel.velocity_scale = channel.flow_scale = 10;
    channel.h0_m = channel.lowest_point_m = 100;
    channel.exponent = 1.7;
    curve.controls = {channel};
    const auto rows = book.reach_rows("H-1");
    curve.reach = {{rows.back().row, rows.back().stored.version}};
    curve.bands = {{100, 0.1}, {105, 0.1}};
    for (const auto& id : used) curve.gaugings.push_back(pinned(id, GaugingUse::used, ""));
    for (const auto& id : left_out)
      curve.gaugings.push_back(pinned(id, GaugingUse::left_out, "left out by name"));
    auto writer = book.begin(head("curve"));
    const int number = writer.add_curve(curve).number;
    writer.commit();
    return number;
  }

 private:
  static std::string new_path() {
    static int count = 0;
    const std::string name =
        "scourbook-history-" + std::to_string(::getpid()) + "-" + std::to_string(++count) + ".scourbook";
    return (std::filesystem::temp_directory_path() / name).string();
  }
  [[nodiscard]] CurveGauging pinned(const std::string& id, GaugingUse use, const std::string& reason) const {
    const auto held = book.gauging("H-1", id);
    CurveGauging row;
    row.gauging = id;
    row.version = held->version;
    row.use = use;
    row.reason = reason;
    row.role = "discharge";
    // Gauge zeros of these tests are whole centimetres: the level as a derivation would have had it.
    for (const auto& zero : book.gauge_zeros("H-1")) {
      if (zero.value.valid_from > held->value.middle()) continue;
      row.level_m = (held->value.mean_stage() + zero.value.zero).metres();
    }
    row.discharge_m3s = row.curve_m3s = held->value.discharge.m3s();
    return row;
  }

  std::string path_;

 public:
  store::Book book;
};

}  // namespace book_fixture
