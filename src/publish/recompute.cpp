#include "publish/recompute.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <set>

#include "history/adopt.hpp"
#include "rating/evaluate.hpp"

namespace scourbook::publish {
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

Instant end_of(UtcMonth month) {
  return start_of(UtcMonth{month.number + 1});
}

/// The curve that a period passes from; nothing where none is in force just before it.
std::optional<int> outgoing_of(const std::vector<Period>& periods, std::size_t at) {
  if (at == 0 || periods[at].blend.count() == 0) return {};
  const Period& before = periods[at - 1];
  return before.until == periods[at].from ? before.curve : std::nullopt;
}

}  // namespace

Recomputer::Recomputer(const store::Book& book, const history::View& view)
    : book_(book),
      view_(view),
      datum_(history::level_datum(book, view.station, Known{view.data_version})),
      longest_gap_ms_(book.settings(view.known).longest_gap_minutes * 60'000),
      curves_(curves_of(book, view)) {}

std::vector<LevelReading> Recomputer::readings(Instant from, Instant until) const {
  std::vector<LevelReading> all;
  for (UtcMonth month = utc_month_of(from); month <= utc_month_of(until); ++month.number) {
    const auto block = book_.stage_block(view_.station, month, Known{view_.data_version});
    for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
      const Instant time = from_ms(block.time_ms[i]);
      if (time < from || time > until || block.ticks[i] == store::kMissing) continue;
      if (block.quality[i] == Quality::missing) continue;
      const Stage stage = Stage::from_ticks(block.ticks[i]);
      if (const auto level = datum_.level(stage, time)) all.push_back({block.time_ms[i], stage, *level});
    }
  }
  return all;
}

std::optional<LevelReading> Recomputer::last_before(Instant time) const {
  auto months = book_.stage_months(view_.station, Known{view_.data_version});
  for (auto month = months.rbegin(); month != months.rend(); ++month) {
    if (start_of(*month) >= time) continue;
    const auto found = readings(start_of(*month), std::min(time, end_of(*month)) - Millis(1));
    if (!found.empty()) return found.back();
  }
  return {};
}

std::optional<LevelReading> Recomputer::first_after(Instant time) const {
  for (const UtcMonth month : book_.stage_months(view_.station, Known{view_.data_version})) {
    if (end_of(month) <= time) continue;
    const auto found = readings(std::max(time + Millis(1), start_of(month)), end_of(month) - Millis(1));
    if (!found.empty()) return found.front();
  }
  return {};
}

/// Of section and channel one governs: the channel from the takeover up; below it, or where none is known,
/// the lesser flow. Overbank controls add to it.
TracedCurve Recomputer::through(int curve, double level_m) const {
  TracedCurve traced;
  traced.curve = curves_.at(curve);
  traced.act = book_.curve_act(view_.station, curve);
  traced.level_m = level_m;
  TracedControl *section = nullptr, *channel = nullptr;
  traced.controls.reserve(traced.curve.controls.size());
  for (const ControlCoefficients& control : traced.curve.controls) {
    auto& own = traced.controls.emplace_back();
    own.control = control;
    own.discharge_m3s = rating::control_flow(control, level_m);
    if (control.kind == ControlKind::section) section = &own;
    if (control.kind == ControlKind::channel) channel = &own;
    if (control.kind == ControlKind::overbank) own.counts = own.discharge_m3s > 0;
  }
  TracedControl* governs = section == nullptr ? channel : section;
  if (section != nullptr && channel != nullptr) {
    const auto& takeover = traced.curve.takeover_level_m;
    const bool taken_over = takeover && level_m >= *takeover;
    if (taken_over || channel->discharge_m3s < section->discharge_m3s) governs = channel;
  }
  if (governs != nullptr) governs->counts = governs->discharge_m3s > 0;
  if (governs != nullptr) traced.discharge_m3s = governs->discharge_m3s;
  for (const TracedControl& own : traced.controls) {
    if (own.control.kind == ControlKind::overbank) traced.discharge_m3s += own.discharge_m3s;
  }
  return traced;
}

std::optional<Evaluated> Recomputer::at(std::int64_t time_ms, std::int64_t side_ms, double level_m) const {
  const auto& periods = view_.edition->periods;
  const int index = history::period_at(periods, from_ms(side_ms));
  if (index < 0 || !periods[static_cast<std::size_t>(index)].curve) return {};
  const Period& period = periods[static_cast<std::size_t>(index)];
  Evaluated result;
  result.curves.push_back(through(*period.curve, level_m));
  result.discharge_m3s = result.curves[0].discharge_m3s;
  const auto outgoing = outgoing_of(periods, static_cast<std::size_t>(index));
  if (!outgoing || side_ms >= to_ms(period.from + period.blend)) return result;
  const double x =
      static_cast<double>(time_ms - to_ms(period.from)) / static_cast<double>(period.blend.count());
  TracedCurve before = through(*outgoing, level_m);
  result.curves[0].weight = x;
  before.weight = 1 - x;
  result.discharge_m3s = (1 - x) * before.discharge_m3s + x * result.curves[0].discharge_m3s;
  result.curves.insert(result.curves.begin(), std::move(before));
  return result;
}

std::vector<Segment> Recomputer::between(const LevelReading& a, const LevelReading& b) const {
  std::vector<Segment> segments;
  if (b.time_ms - a.time_ms > longest_gap_ms_) return segments;
  std::set<std::int64_t> cuts;
  for (const Period& period : view_.edition->periods) {
    cuts.insert(to_ms(period.from));
    if (period.until) cuts.insert(to_ms(*period.until));
  }
  std::int64_t from_ms = a.time_ms;
  double from_level = a.level.metres();
  const auto add = [&](std::int64_t until_ms, double until_level, std::int64_t side_ms) {
    auto left = at(from_ms, from_ms, from_level);
    auto right = at(until_ms, side_ms, until_level);
    if (left && right && from_ms < until_ms)
      segments.push_back({from_ms, until_ms, *std::move(left), *std::move(right)});
    from_ms = until_ms;
    from_level = until_level;
  };
  for (auto cut = cuts.upper_bound(a.time_ms); cut != cuts.end() && *cut <= b.time_ms; ++cut) {
    const double share = static_cast<double>(*cut - a.time_ms) / static_cast<double>(b.time_ms - a.time_ms);
    const double level = *cut == b.time_ms ? b.level.metres()
                                           : a.level.metres() + (b.level.metres() - a.level.metres()) * share;
    add(*cut, level, *cut - 1);
  }
  if (from_ms < b.time_ms) add(b.time_ms, b.level.metres(), b.time_ms);
  return segments;
}

}  // namespace scourbook::publish
