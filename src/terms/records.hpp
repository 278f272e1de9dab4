#pragma once
// Field records: what an office writes down about a station, before the program computes anything.

#include <optional>
#include <string>
#include <vector>

#include "terms/calendar.hpp"
#include "terms/quality.hpp"
#include "terms/quantity.hpp"
#include "terms/time.hpp"

namespace scourbook {

struct Station {
  std::string id;
  std::string name;
  std::string river;
  StationClock clock;
  std::optional<double> latitude;   ///< degrees north
  std::optional<double> longitude;  ///< degrees east
  std::string remark;
  friend bool operator==(const Station&, const Station&) = default;
};

/// Gauge zero from `valid_from` until the next row.
struct GaugeZeroRow {
  std::string station;
  Instant valid_from{};
  GaugeZero zero;
  std::string remark;
  friend bool operator==(const GaugeZeroRow&, const GaugeZeroRow&) = default;
};

enum class ControlKind { section, channel, overbank };
enum class FlowLaw { manning, chezy, critical };
[[nodiscard]] std::string_view word(ControlKind kind);
[[nodiscard]] std::string_view word(FlowLaw law);
[[nodiscard]] std::optional<ControlKind> parse_control(std::string_view text);
[[nodiscard]] std::optional<FlowLaw> parse_flow_law(std::string_view text);

/// One row of the reach file: what is known of a control without a survey, from `valid_from` on.
struct ReachRow {
  std::string station;
  Instant valid_from{};
  ControlKind control = ControlKind::channel;
  std::string cross_section;
  std::string part = "main";
  FlowLaw law = FlowLaw::manning;
  std::optional<double> slope;          ///< S, m/m; manning and chezy
  std::optional<double> roughness_n;    ///< Manning's n, s/m^(1/3)
  std::optional<double> chezy_c;        ///< Chezy's C, m^(1/2)/s
  std::optional<double> coefficient;    ///< discharge coefficient of a crest, 1 = theory
  double meander_factor = 1;            ///< Cowan's m, >= 1
  std::optional<double> scale_sd_pct;   ///< prior sd of the velocity scale, percent
  std::optional<double> level_from_m;   ///< range of levels in which the control's law is fitted
  std::optional<double> level_to_m;
  std::string remark;
  friend bool operator==(const ReachRow&, const ReachRow&) = default;
};

struct SurveyPoint {
  std::string cross_section;
  std::string part = "main";  ///< part to which the strip from this point to the next one belongs
  double distance_m = 0;
  double elevation_m = 0;
  std::string mark;  ///< name of a fixed point; empty where it is none
  friend bool operator==(const SurveyPoint&, const SurveyPoint&) = default;
};

struct Survey {
  std::string station;
  std::string id;
  Instant surveyed_at{};
  std::optional<double> level_uncertainty_m;  ///< one sd of the survey's common level error
  std::vector<SurveyPoint> points;            ///< in the order of the file, one cross-section after another
  std::string remark;
  friend bool operator==(const Survey&, const Survey&) = default;
};

struct Gauging {
  std::string station;
  std::string id;
  Instant start{};
  std::optional<Instant> end;
  Stage stage;                                ///< at the start, or the mean
  std::optional<Stage> stage_end;             ///< where given, the gauging's stage is the mean of both
  Discharge discharge;
  std::optional<double> uncertainty_pct;      ///< 95 % of the discharge
  std::optional<double> stage_uncertainty_m;  ///< one sd
  std::string method;                         ///< "zero-flow-level": stage is that of the control's lowest point
  std::optional<double> area_m2;
  std::optional<double> width_m;
  std::optional<double> velocity_ms;
  Quality quality = Quality::unchecked;
  std::string remark;

  /// The middle of start and end: the time that decides its period.
  [[nodiscard]] Instant middle() const;
  /// The stage that stands for the whole gauging.
  [[nodiscard]] Stage mean_stage() const;
  [[nodiscard]] bool is_zero_flow() const { return discharge.m3s() == 0; }
  [[nodiscard]] bool is_zero_flow_level() const { return method == "zero-flow-level"; }
  friend bool operator==(const Gauging&, const Gauging&) = default;
};

/// A correction added to recorded stage, linear from `from` to `until` (until excluded). Readings stay as recorded.
struct StageCorrection {
  std::string station;
  Instant from{};
  Instant until{};
  HeightChange add_at_from;
  HeightChange add_at_until;
  std::string remark;
  friend bool operator==(const StageCorrection&, const StageCorrection&) = default;
};

}  // namespace scourbook
