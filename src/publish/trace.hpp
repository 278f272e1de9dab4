#pragma once
// The chain behind one flow: reading, level, curve, survey, gaugings, edition, acts and people; computed
// again and compared.

#include <optional>
#include <string>
#include <vector>

#include "history/state.hpp"
#include "store/book.hpp"

namespace scourbook::publish {

/// One reading of a chain and how it becomes a level.
struct TracedReading {
  Instant time{};
  std::string recorded;    ///< as recorded, with its unit: "1.234 m"; "missing"
  bool has_level = false;  ///< it has a value and a gauge zero; else stage, correction and level are 0
  Quality quality = Quality::unchecked;
  Stage stage;
  std::string file;  ///< name of the file it came from
  std::int64_t file_number = 0;
  std::int64_t line = 0;
  std::string file_sha256;
  std::int64_t act = 0;
  GaugeZero gauge_zero;
  SourceLine gauge_zero_source;
  std::string gauge_zero_file;
  HeightChange correction;  ///< sum of stage corrections at that time
  Level level;
};

/// One control of a curve at the traced level.
struct TracedControl {
  ControlCoefficients control;
  double discharge_m3s = 0;
  bool counts = false;  ///< it governs, or it is an overbank control with a flow
};

/// One curve that took part, with what stands behind it.
struct TracedCurve {
  RatingCurve curve;
  std::int64_t act = 0;  ///< that stored it
  double weight = 1;     ///< under 1 in a blend
  double level_m = 0;
  double discharge_m3s = 0;
  std::vector<TracedControl> controls;
  std::string survey_file;
  SourceLine survey_source;
  std::vector<std::string> out_of_date;  ///< reasons, empty where it is not
};

struct TracedValue {
  std::string station;
  Instant time{};
  history::View view;
  Period period;  ///< that holds `time`
  std::int64_t edition_act = 0;
  /// One at the time itself, else the nearest on each side that have a level, however far.
  std::vector<TracedReading> readings;
  /// The incoming last; between readings first those of the earlier end of the stretch (a reading or a
  /// boundary), then those of its later end. Empty where there is no flow.
  std::vector<TracedCurve> curves;
  std::string no_flow_because;           ///< in words, where there is no value
  std::optional<double> discharge_m3s;   ///< as a replay gives it
  std::optional<double> recomputed_m3s;  ///< from the readings above by scalar arithmetic alone
  double sd_ln_q = 0;
  Flags flags = 0;
  Quality quality = Quality::missing;  ///< as published where it is

  std::optional<int> publication;  ///< newest that covers the time
  std::int64_t publication_act = 0;
  std::optional<int> replay;  ///< its replay
  std::optional<std::int64_t>
      published_units;  ///< 10^-decimals m3/s; none where it has no figure at the time
  std::optional<std::int64_t> recomputed_units;  ///< recomputed_m3s rounded by the same rule
  int decimals = 3;
  std::int64_t digits = 3;

  std::vector<Act> acts;  ///< all that were named above, by number
  /// Recomputing gives the same figure: bit by bit for a replay's, in every digit for a published one.
  [[nodiscard]] bool agrees() const;
};

struct TraceRequest {
  std::string station;
  Instant time{};
  Known known;
  std::optional<int>
      edition;  ///< neither given: of the publication that covers the time, else the newest known
  std::optional<std::int64_t> data_version;
};

/// Traces the flow at an instant. Between two readings the flow is linear in time (both are traced); at a
/// reading it is that reading's. Throws StoreError refused where station, edition or data version do not
/// exist.
[[nodiscard]] TracedValue trace_value(const store::Book& book, const TraceRequest& request);

/// The chain behind a day mean: how much of the day each piece held, and the day mean computed again.
struct TracedPiece {
  Instant from{};
  Instant until{};
  double from_m3s = 0;
  double until_m3s = 0;
  int curve = 0;
};
struct TracedDay {
  std::string station;
  StationDay day{};
  history::View view;
  std::vector<TracedPiece> pieces;  ///< cut at the ends of the day
  std::optional<double> mean_m3s;
  std::optional<double> recomputed_m3s;  ///< sum of (Q1 + Q2) / 2 dt over the pieces / their time
  double share = 0;
  double sd_ln_q = 0;
  Flags flags = 0;
  Quality quality = Quality::missing;  ///< as published where it is
  std::vector<TracedCurve> curves;     ///< level and flow left 0
  std::vector<std::string> files;      ///< names of the stage files whose readings took part
  std::optional<int> publication;
  std::int64_t publication_act = 0;
  std::optional<int> replay;
  std::optional<std::int64_t> published_units;
  std::optional<std::int64_t> recomputed_units;
  int decimals = 3;
  std::int64_t digits = 3;
  std::vector<Act> acts;
  /// As for a value.
  [[nodiscard]] bool agrees() const;
};
/// `request.time` lies in the day.
[[nodiscard]] TracedDay trace_day(const store::Book& book, const TraceRequest& request);

}  // namespace scourbook::publish
