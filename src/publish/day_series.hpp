#pragma once
// Days of a series on their way out: as they are, or gathered into months and water years.

#include <functional>
#include <optional>
#include <utility>
#include <vector>

#include "publish/series.hpp"

namespace scourbook::publish {

/// The mean flow of one station day, computed or published.
struct DayValue {
  StationDay day{};
  std::optional<double> mean_m3s;
  double sd_ln_q = 0;
  double u95_pct = 0;
  Flags flags = 0;
  Quality quality = Quality::missing;
  double share = 0;
  std::vector<int> curves;
  std::int64_t units = 0;  ///< published: the figure, in 10^-decimals m3/s
};

/// The days that the means of a request are made of, [first, end): for days those that begin in [from,
/// until), for months and water years all days of those that begin there.
[[nodiscard]] std::pair<StationDay, StationDay> days_of(const SeriesRequest& request,
                                                        const StationClock& clock);

/// Takes days in order of time and hands on rows. The mean of a month or water year is that of its days,
/// each weighted by its share; its sd the flow-weighted mean of theirs; its quality the worst of theirs. Not
/// given under the least share; at best estimate, with the flag gap, where share < 1.
class DaySeries {
 public:
  using RowSink = std::function<void(const SeriesRow&)>;
  DaySeries(MeanOver mean, const StationClock& clock, double least_share, RowSink sink);

  void add(const DayValue& day);
  void finish();  ///< hands on the last month or water year

 private:
  /// What has been added of one month or water year.
  struct Gathered {
    StationDay first{}, end{};
    double share = 0;   // days
    double volume = 0;  // m3/s times days
    double spread = 0;  // its sd
    Flags flags = 0;
    Quality worst = Quality::good;
    std::vector<int> curves;
  };
  [[nodiscard]] SeriesRow row_of(const Gathered& gathered) const;

  MeanOver mean_;
  StationClock clock_;
  double least_share_;
  RowSink sink_;
  std::optional<Gathered> gathered_;
};

}  // namespace scourbook::publish
