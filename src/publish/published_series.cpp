#include "publish/published_series.hpp"

#include <algorithm>

#include "hydraulics/power.hpp"
#include "publish/rounding.hpp"

namespace scourbook::publish {
namespace {

/// Figures of a publication in the units of a series that has no fewer decimals.
class Units {
 public:
  Units(const store::Publication& publication, const SeriesHead& head)
      : factor_(power_of_ten(head.decimals - publication.decimals)),
        per_m3s_(static_cast<double>(power_of_ten(publication.decimals))) {}
  [[nodiscard]] std::int64_t units(std::int64_t value) const { return value * factor_; }
  [[nodiscard]] double m3s(std::int64_t value) const { return static_cast<double>(value) / per_m3s_; }

 private:
  std::int64_t factor_;
  double per_m3s_;
};

/// The sd of ln Q that a published u95 stands for.
double sd_of(double u95_pct) {
  return hydraulics::reproducible_log(1 + u95_pct / 100) / 1.96;
}

SeriesRow row_of(const store::PublishedMonth& month, std::size_t i, const Units& units) {
  SeriesRow row;
  row.time = from_ms(month.time_ms[i]);
  if (month.value[i]) {
    row.units = units.units(*month.value[i]);
    row.discharge_m3s = units.m3s(*month.value[i]);
    row.u95_pct = static_cast<double>(month.u95_tenth_pct[i]) / 10;
    row.curves = {month.curve[i]};
  }
  row.quality = month.quality[i];
  row.flags = month.flags[i];
  return row;
}

DayValue value_of(const store::PublishedDay& day, const Units& units) {
  DayValue value;
  value.day = {day.day};
  value.flags = day.flags;
  value.quality = day.quality;
  value.share = day.share;
  value.curves = day.curves;
  if (!day.mean) return value;
  value.units = units.units(*day.mean);
  value.mean_m3s = units.m3s(*day.mean);
  value.u95_pct = static_cast<double>(day.u95_tenth_pct.value_or(0)) / 10;
  value.sd_ln_q = sd_of(value.u95_pct);
  return value;
}

}  // namespace

PublishedSeries::PublishedSeries(const store::Book& book, const SeriesRequest& request,
                                 const StationClock& clock)
    : book_(book),
      request_(request),
      clock_(clock),
      days_(days_of(request, clock)),
      heads_(book.publications(request.station, request.known)) {
  // The last month or water year reaches beyond what was asked for.
  const bool means = request.mean != MeanOver::none;
  covered_ = coverage(heads_, means ? start_of(days_.first, clock) : request.from,
                      means ? start_of(days_.second, clock) : request.until);
}

void PublishedSeries::describe(SeriesHead& head) const {
  head.decimals = 0;
  head.digits = 1;
  for (const auto& publication : heads_) {
    const bool speaks = std::any_of(covered_.begin(), covered_.end(), [&](const Coverage& stretch) {
      return stretch.publication == publication.number;
    });
    if (!speaks) continue;
    head.publications.push_back(publication.number);
    head.decimals = std::max(head.decimals, publication.decimals);
    head.digits = std::max(head.digits, book_.settings(Known{publication.act}).published_digits);
  }
}

void PublishedSeries::run(const SeriesHead& head, double least_share, const DaySeries::RowSink& sink) {
  if (request_.mean == MeanOver::none) return instants(head, sink);
  means(head, least_share, sink);
}

void PublishedSeries::instants(const SeriesHead& head, const DaySeries::RowSink& sink) {
  for (const Coverage& stretch : covered_) {
    const auto& whole = publication(stretch.publication);
    const Units units(whole, head);
    for (const auto& month : whole.months) {
      const auto& times = month.time_ms;
      const auto begin = std::lower_bound(times.begin(), times.end(), to_ms(stretch.from));
      const auto end = std::lower_bound(begin, times.end(), to_ms(stretch.until));
      for (auto at = begin; at != end; ++at) {
        sink(row_of(month, static_cast<std::size_t>(at - times.begin()), units));
      }
    }
  }
}

void PublishedSeries::means(const SeriesHead& head, double least_share, const DaySeries::RowSink& sink) {
  DaySeries out(request_.mean, clock_, least_share, sink);
  for (const Coverage& stretch : covered_) {
    const auto& whole = publication(stretch.publication);
    const Units units(whole, head);
    for (const auto& day : whole.days) {
      const Instant begin = start_of(StationDay{day.day}, clock_);
      if (stretch.from <= begin && begin < stretch.until) out.add(value_of(day, units));
    }
  }
  out.finish();
}

const store::Publication& PublishedSeries::publication(int number) {
  if (read_ && read_->number == number) return *read_;
  read_ = book_.publication(request_.station, number);
  return read_.value();
}

}  // namespace scourbook::publish
