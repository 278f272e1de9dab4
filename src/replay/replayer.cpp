#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "replay/inputs.hpp"

namespace scourbook::replay {
namespace {

std::map<int, RatingCurve> curves_of(const store::Book& book, const history::View& view) {
  std::map<int, RatingCurve> curves;
  for (const Period& period : view.edition->periods) {
    if (!period.curve || curves.count(*period.curve) != 0) continue;
    auto curve = book.curve(view.station, *period.curve);
    if (!curve) {
      throw store::StoreError(store::StoreError::Kind::damaged,
                              fmt::format("station {} has no curve {}, which its edition {} names",
                                          view.station, *period.curve, view.edition->number));
    }
    curves.emplace(*period.curve, *std::move(curve));
  }
  return curves;
}

StationClock clock_of(const store::Book& book, const history::View& view) {
  const auto station = book.station(view.station, view.known);
  if (!station) {
    throw store::StoreError(store::StoreError::Kind::refused, "there is no station " + view.station);
  }
  if (!view.edition) {
    throw store::StoreError(store::StoreError::Kind::refused,
                            "station " + view.station + " has no edition yet: derive a curve and adopt it");
  }
  return station->value.clock;
}

/// The readings of `block` in [from, until).
store::StageBlock cut(store::StageBlock block, Instant from, Instant until) {
  const auto& times = block.time_ms;
  const auto begin = std::lower_bound(times.begin(), times.end(), to_ms(from)) - times.begin();
  const auto end = std::lower_bound(times.begin(), times.end(), to_ms(until)) - times.begin();
  const auto keep = [begin, end](auto& column) {
    if (column.empty()) return;
    column.erase(column.begin() + std::max(begin, end), column.end());
    column.erase(column.begin(), column.begin() + begin);
  };
  keep(block.ticks);
  keep(block.quality);
  keep(block.piece);
  keep(block.time_ms);
  return block;
}

FlowSpans spans_of(FlowBlock& block) {
  return {block.discharge_m3s, block.sd_ln_q, block.flags, block.quality, block.control};
}

/// A month in which nothing has a flow yet.
FlowBlock without_flows(const store::StageBlock& stage, std::vector<double> level_m) {
  FlowColumns empty(level_m.size());
  FlowBlock block;
  block.month = stage.month;
  block.time_ms = stage.time_ms;
  block.level_m = std::move(level_m);
  block.curve.assign(stage.time_ms.size(), 0);
  block.discharge_m3s = std::move(empty.discharge_m3s);
  block.sd_ln_q = std::move(empty.sd_ln_q);
  block.flags = std::move(empty.flags);
  block.quality = std::move(empty.quality);
  block.control = std::move(empty.control);
  return block;
}

}  // namespace

std::vector<UtcMonth> Inputs::months(Instant from, Instant until) const {
  std::vector<UtcMonth> wanted;
  if (until <= from) return wanted;
  const UtcMonth first = utc_month_of(from);
  const UtcMonth last = utc_month_of(until - Millis{1});
  for (const UtcMonth month : book.stage_months(station, data)) {
    if (first <= month && month <= last) wanted.push_back(month);
  }
  return wanted;
}

void Inputs::through(const Stretch& stretch, std::span<const std::int64_t> time_ms,
                     std::span<const double> level_m, const FlowSpans& out) const {
  curve_flows(*stretch.curve, settings, level_m, out);
  if (stretch.outgoing == nullptr) return;
  FlowColumns outgoing(level_m.size());
  curve_flows(*stretch.outgoing, settings, level_m, outgoing.spans());
  std::vector<double> weight(time_ms.size());
  std::transform(time_ms.begin(), time_ms.end(), weight.begin(),
                 [&](std::int64_t time) { return stretch.weight(time); });
  blend_flows(weight, outgoing.spans(), out);
}

Replayer::Replayer(const store::Book& book, const history::View& view)
    : inputs_(new Inputs{book, view.station, Known{view.data_version}, clock_of(book, view),
                         book.settings(view.known),
                         history::level_datum(book, view.station, Known{view.data_version}),
                         Timeline(view.edition->periods, curves_of(book, view))}) {}

void Replayer::run(Instant from, Instant until, const std::function<void(const FlowBlock&)>& sink) const {
  for (const UtcMonth month : inputs_->months(from, until)) {
    const store::StageBlock stage = cut(inputs_->stage(month), from, until);
    if (!stage.time_ms.empty()) sink(flows(stage));
  }
}

FlowBlock Replayer::flows(const store::StageBlock& stage) const {
  std::vector<double> level_m = inputs_->datum.levels_m(stage.time_ms, stage.ticks);
  for (std::size_t i = 0; i < level_m.size(); ++i) {
    if (stage.quality[i] == Quality::missing) level_m[i] = std::numeric_limits<double>::quiet_NaN();
  }
  FlowBlock block = without_flows(stage, std::move(level_m));
  const auto& times = block.time_ms;
  const auto place = [&](std::int64_t time) {
    return static_cast<std::size_t>(std::lower_bound(times.begin(), times.end(), time) - times.begin());
  };
  // The edition is split here, so that the loops inside see one curve and plain arrays.
  for (const Stretch& stretch : inputs_->timeline.stretches()) {
    const std::size_t begin = place(stretch.from_ms);
    const std::size_t end = place(stretch.until_ms);
    if (begin == end) continue;
    inputs_->through(stretch, std::span(times).subspan(begin, end - begin),
                     std::span<const double>(block.level_m).subspan(begin, end - begin),
                     spans_of(block).part(begin, end - begin));
    for (std::size_t i = begin; i < end; ++i) {
      if (std::isnan(block.discharge_m3s[i])) continue;
      block.curve[i] = stretch.curve->number;
      block.quality[i] = worse(block.quality[i], stage.quality[i]);
    }
  }
  return block;
}

}  // namespace scourbook::replay
