#pragma once
// A series out of what was published: each time from the newest publication that covers it.

#include <optional>
#include <utility>
#include <vector>

#include "publish/coverage.hpp"
#include "publish/day_series.hpp"
#include "publish/series.hpp"

namespace scourbook::publish {

/// Reads the publications that a request draws on, one at a time. The book must outlive it.
class PublishedSeries {
 public:
  PublishedSeries(const store::Book& book, const SeriesRequest& request, const StationClock& clock);

  [[nodiscard]] bool empty() const { return covered_.empty(); }
  /// Publications that take part, decimals (the most that one of them has) and significant digits.
  void describe(SeriesHead& head) const;
  /// Figures in units of the head's decimals.
  void run(const SeriesHead& head, double least_share, const DaySeries::RowSink& sink);

 private:
  void instants(const SeriesHead& head, const DaySeries::RowSink& sink);
  void means(const SeriesHead& head, double least_share, const DaySeries::RowSink& sink);
  [[nodiscard]] const store::Publication& publication(int number);

  const store::Book& book_;
  SeriesRequest request_;
  StationClock clock_;
  std::pair<StationDay, StationDay> days_;
  std::vector<store::Publication> heads_;
  std::vector<Coverage> covered_;
  std::optional<store::Publication> read_;  ///< the one read last
};

}  // namespace scourbook::publish
