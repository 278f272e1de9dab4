#pragma once
// A flow series of one station as people and models get it: computed now from a stated edition and data
// version, or as published.

#include <functional>
#include <iosfwd>
#include <optional>
#include <string>
#include <vector>

#include "history/state.hpp"
#include "store/book.hpp"
#include "terms/calendar.hpp"
#include "terms/quality.hpp"

namespace scourbook::publish {

/// Over what a value is the mean. none: values at the readings.
enum class MeanOver { none, day, month, water_year };
[[nodiscard]] std::string_view word(MeanOver mean);  ///< "none", "day", "month", "water-year"
[[nodiscard]] std::optional<MeanOver> parse_mean_over(std::string_view text);

struct SeriesRequest {
  std::string station;
  Instant from{};
  Instant until{};  ///< excluded; means are given of the station days, months, water years that begin inside
  MeanOver mean = MeanOver::none;
  bool published = false;
  Known known;
  std::optional<int> edition;
  std::optional<std::int64_t> data_version;
};

struct SeriesRow {
  Instant time{};  ///< of the reading, or the start of what the mean is over
  std::optional<double> discharge_m3s;
  std::int64_t units = 0;  ///< published values and days: the figure, in 10^-decimals m3/s
  double u95_pct = 0;      ///< of a published series in tenths
  Quality quality = Quality::missing;
  std::vector<int> curves;  ///< that took part, in order of time
  Flags flags = 0;
  double share = 1;  ///< of the day, month or water year with a flow
};

/// What stands above a series: which state of knowledge it is.
struct SeriesHead {
  Station station;
  SeriesRequest request;
  int edition = 0;                ///< 0 where published
  std::int64_t data_version = 0;  ///< 0 where published
  int method = store::kMethodVersion;
  std::int64_t known_act = 0;     ///< the newest act that was seen
  std::vector<int> publications;  ///< that took part, where published
  int decimals = 3;
  std::int64_t digits = 3;
  std::vector<std::string> survey_of_curve;  ///< index: curve number; empty where no such curve
};

/// Runs a request: `head` once, then `row` in order of time. At most a month of working flows, or one
/// publication, is held in memory.
///   none        Replayer::run; a reading without flow is a row without discharge
///   day         Replayer::day_means
///   month, water_year   mean of the day means weighted by their shares; the sd is the flow-weighted mean of
///               those of the days (errors of a curve go together); not given under the least share
///   published   values and days of the newest publication that covers each; months and water years as
///               above, from published days. Times that are not published have no row
/// Throws StoreError refused for an unknown station and where there is no edition, or nothing published.
void run_series(const store::Book& book, const SeriesRequest& request,
                const std::function<void(const SeriesHead&)>& head,
                const std::function<void(const SeriesRow&)>& row);

/// CSV (RFC 4180): lines that start with `#` say what it is, then time, discharge_m3s, u95_pct, quality,
/// curve, survey, flags (several curves, surveys, flags are joined by a space), for means also share. Times
/// in `shown`; days as dates. Working values with 7 significant digits, published ones as published. A
/// working series says "working record, not published"; every series carries the caution about its use.
void write_csv(const store::Book& book, const SeriesRequest& request, UtcOffset shown, std::ostream& out);

/// The usual caution for floods, water supply and dam safety; one line without an end of line.
[[nodiscard]] std::string caution();

}  // namespace scourbook::publish
