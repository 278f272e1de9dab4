#include "history/level_datum.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

namespace scourbook::history {
namespace {

std::int64_t correction_ticks(const StageCorrection& correction, Instant time) {
  const double share = static_cast<double>((time - correction.from).count()) /
                       static_cast<double>((correction.until - correction.from).count());
  const auto first = static_cast<double>(correction.add_at_from.ticks());
  const auto last = static_cast<double>(correction.add_at_until.ticks());
  return std::llround(first + (last - first) * share);
}

/// First row that is not yet valid at `time`.
auto next_zero(const std::vector<Stored<GaugeZeroRow>>& zeros, Instant time) {
  return std::upper_bound(zeros.begin(), zeros.end(), time, [](Instant t, const Stored<GaugeZeroRow>& row) {
    return t < row.value.valid_from;
  });
}

}  // namespace

LevelDatum::LevelDatum(std::vector<Stored<GaugeZeroRow>> zeros,
                       std::vector<Stored<StageCorrection>> corrections)
    : zeros_(std::move(zeros)), corrections_(std::move(corrections)) {
  assert(std::is_sorted(zeros_.begin(), zeros_.end(), [](const auto& a, const auto& b) {
    return a.value.valid_from < b.value.valid_from;
  }));
}

std::optional<Level> LevelDatum::level(Stage stage, Instant time) const {
  const std::optional<GaugeZero> zero = zero_at(time);
  if (!zero) return {};
  return stage + *zero + correction_at(time);
}

std::optional<GaugeZero> LevelDatum::zero_at(Instant time) const {
  const auto next = next_zero(zeros_, time);
  if (next == zeros_.begin()) return {};
  return (next - 1)->value.zero;
}

HeightChange LevelDatum::correction_at(Instant time) const {
  std::int64_t sum = 0;
  for (const auto& row : corrections_) {
    if (row.value.from <= time && time < row.value.until) sum += correction_ticks(row.value, time);
  }
  return HeightChange::from_ticks(sum);
}

std::vector<double> LevelDatum::levels_m(const std::vector<std::int64_t>& time_ms,
                                         const std::vector<std::int64_t>& stage_ticks) const {
  assert(time_ms.size() == stage_ticks.size());
  std::vector<double> level(time_ms.size(), std::numeric_limits<double>::quiet_NaN());
  if (time_ms.empty()) return level;
  const Instant first = from_ms(time_ms.front());
  const Instant last = from_ms(time_ms.back());
  std::vector<StageCorrection> active;  // those that touch these readings at all
  for (const auto& row : corrections_) {
    if (row.value.from <= last && row.value.until > first) active.push_back(row.value);
  }
  auto next = next_zero(zeros_, first);
  for (std::size_t i = 0; i < time_ms.size(); ++i) {
    const Instant time = from_ms(time_ms[i]);
    while (next != zeros_.end() && next->value.valid_from <= time) ++next;
    if (stage_ticks[i] == store::kMissing || next == zeros_.begin()) continue;
    std::int64_t ticks = stage_ticks[i] + (next - 1)->value.zero.ticks();
    for (const StageCorrection& correction : active) {
      if (correction.from <= time && time < correction.until) ticks += correction_ticks(correction, time);
    }
    level[i] = Level::from_ticks(ticks).metres();
  }
  return level;
}

LevelDatum level_datum(const store::Book& book, const std::string& station, Known known) {
  return {book.gauge_zeros(station, known), book.stage_corrections(station, known)};
}

}  // namespace scourbook::history
