#include "publish/day_series.hpp"

#include <algorithm>
#include <tuple>

#include "rating/evaluate.hpp"

namespace scourbook::publish {
namespace {

StationDay first_day_from(Instant time, const StationClock& clock) {
  const StationDay day = day_of(time, clock);
  return start_of(day, clock) >= time ? day : StationDay{day.number + 1};
}

/// The month or water year that holds a day: its first day and the one after its last.
std::pair<StationDay, StationDay> span_of(StationDay day, MeanOver mean, const StationClock& clock) {
  if (mean == MeanOver::month) return {month_start(day), next_month_start(day)};
  const int year = water_year(day, clock);
  return {water_year_start(year, clock), water_year_start(year + 1, clock)};
}

void add_once(std::vector<int>& all, const std::vector<int>& more) {
  for (const int item : more) {
    if (std::find(all.begin(), all.end(), item) == all.end()) all.push_back(item);
  }
}

}  // namespace

std::pair<StationDay, StationDay> days_of(const SeriesRequest& request, const StationClock& clock) {
  const StationDay first = first_day_from(request.from, clock), end = first_day_from(request.until, clock);
  if (request.mean == MeanOver::day || end <= first) return {first, std::max(first, end)};
  const auto begin_from = [&](StationDay day) {
    const auto span = span_of(day, request.mean, clock);
    return span.first == day ? day : span.second;
  };
  return {begin_from(first), begin_from(end)};
}

DaySeries::DaySeries(MeanOver mean, const StationClock& clock, double least_share, RowSink sink)
    : mean_(mean), clock_(clock), least_share_(least_share), sink_(std::move(sink)) {}

void DaySeries::add(const DayValue& day) {
  if (mean_ == MeanOver::day) {
    sink_({start_of(day.day, clock_), day.mean_m3s, day.units, day.u95_pct, day.quality, day.curves,
           day.flags, day.share});
    return;
  }
  if (!gathered_ || day.day >= gathered_->end) {
    finish();
    gathered_.emplace();
    std::tie(gathered_->first, gathered_->end) = span_of(day.day, mean_, clock_);
  }
  if (!day.mean_m3s) return;
  gathered_->share += day.share;
  gathered_->volume += *day.mean_m3s * day.share;
  gathered_->spread += *day.mean_m3s * day.sd_ln_q * day.share;
  gathered_->flags |= day.flags;
  gathered_->worst = worse(gathered_->worst, day.quality);
  add_once(gathered_->curves, day.curves);
}

void DaySeries::finish() {
  if (gathered_) sink_(row_of(*gathered_));
  gathered_.reset();
}

SeriesRow DaySeries::row_of(const Gathered& gathered) const {
  SeriesRow row;
  row.time = start_of(gathered.first, clock_);
  row.share = gathered.share / (gathered.end.number - gathered.first.number);
  row.curves = gathered.curves;
  row.flags = bit(Flag::gap);
  if (gathered.share <= 0 || row.share < least_share_) return row;
  row.discharge_m3s = gathered.volume / gathered.share;
  row.u95_pct = rating::u95_pct(gathered.volume > 0 ? gathered.spread / gathered.volume : 0);
  // No flow and gap are said of the whole, not of one of its days.
  row.flags = static_cast<Flags>(gathered.flags & ~(bit(Flag::no_flow) | bit(Flag::gap)));
  if (gathered.volume == 0) row.flags |= bit(Flag::no_flow);
  row.quality = gathered.worst;
  if (row.share < 1) {
    row.flags |= bit(Flag::gap);
    row.quality = worse(row.quality, Quality::estimate);
  }
  return row;
}

}  // namespace scourbook::publish
