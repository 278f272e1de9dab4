#include "replay/timeline.hpp"

#include <algorithm>
#include <cassert>
#include <limits>

namespace scourbook::replay {
namespace {

constexpr std::int64_t kOpen = std::numeric_limits<std::int64_t>::max();

std::int64_t end_of(const Period& period) {
  return period.until ? to_ms(*period.until) : kOpen;
}

}  // namespace

Timeline::Timeline(const std::vector<Period>& periods, std::map<int, RatingCurve> curves)
    : curves_(std::move(curves)) {
  const Period* before = nullptr;
  for (const Period& period : periods) {
    const std::int64_t from = to_ms(period.from);
    const std::int64_t until = end_of(period);
    assert(from < until && (before == nullptr || end_of(*before) <= from));
    boundaries_.push_back(from);
    if (until != kOpen) boundaries_.push_back(until);
    if (period.curve) {
      Stretch stretch{from, until, &curves_.at(*period.curve), nullptr, from, period.blend.count()};
      const bool blends =
          stretch.blend_ms > 0 && before != nullptr && end_of(*before) == from && before->curve;
      if (blends) {
        Stretch passage = stretch;
        passage.outgoing = &curves_.at(*before->curve);
        // A period cut inside its blend keeps the weights of the whole blend.
        passage.until_ms = std::min(until, from + stretch.blend_ms);
        stretches_.push_back(passage);
        stretch.from_ms = passage.until_ms;
      }
      if (stretch.from_ms < until) stretches_.push_back(stretch);
    }
    before = &period;
  }
  boundaries_.erase(std::unique(boundaries_.begin(), boundaries_.end()), boundaries_.end());
}

const Stretch* Timeline::at(std::int64_t time_ms) const {
  const auto after =
      std::upper_bound(stretches_.begin(), stretches_.end(), time_ms,
                       [](std::int64_t time, const Stretch& stretch) { return time < stretch.from_ms; });
  if (after == stretches_.begin() || (after - 1)->until_ms <= time_ms) return nullptr;
  return &*(after - 1);
}

}  // namespace scourbook::replay
