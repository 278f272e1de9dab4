#include <algorithm>

#include "replay/inputs.hpp"

namespace scourbook::replay {
namespace {

constexpr std::int64_t kDayMs = 86'400'000;

/// One station day as its pieces arrive.
class Day {
 public:
  Day(StationDay day, std::int64_t from_ms) : from_ms_(from_ms) { mean_.day = day; }
  [[nodiscard]] std::int64_t from_ms() const { return from_ms_; }
  [[nodiscard]] std::int64_t until_ms() const { return from_ms_ + kDayMs; }

  /// Adds the part of a piece that lies in the day: a trapezoid, its ends read off the piece.
  void add(const FlowPiece& piece) {
    const std::int64_t begin = std::max(piece.from.time_ms, from_ms());
    const std::int64_t end = std::min(piece.until.time_ms, until_ms());
    if (begin >= end) return;
    const auto width = static_cast<double>(end - begin);
    const FlowPoint& a = piece.from;
    const FlowPoint& b = piece.until;
    volume_ += trapezoid(piece, begin, end, a.discharge_m3s, b.discharge_m3s) * width;
    spread_ += trapezoid(piece, begin, end, a.discharge_m3s * a.sd_ln_q, b.discharge_m3s * b.sd_ln_q) * width;
    covered_ms_ += end - begin;
    note(a);
    note(b);
  }

  [[nodiscard]] DayMean finish(double least_share) {
    mean_.share = static_cast<double>(covered_ms_) / static_cast<double>(kDayMs);
    if (covered_ms_ == 0 || mean_.share < least_share) return without_mean();
    mean_.mean_m3s = volume_ / static_cast<double>(covered_ms_);
    mean_.sd_ln_q = volume_ > 0 ? spread_ / volume_ : 0;
    mean_.flags &= static_cast<Flags>(~bit(Flag::no_flow));
    if (volume_ == 0) mean_.flags |= bit(Flag::no_flow);
    mean_.quality = worst_;
    if (covered_ms_ < kDayMs) {
      mean_.flags |= bit(Flag::gap);
      mean_.quality = worse(mean_.quality, Quality::estimate);
    }
    return mean_;
  }

 private:
  /// Linear in time between the ends of a piece, and exactly their values at them.
  static double between(const FlowPiece& piece, std::int64_t time_ms, double from, double until) {
    if (time_ms == piece.until.time_ms) return until;
    const double share = static_cast<double>(time_ms - piece.from.time_ms) /
                         static_cast<double>(piece.until.time_ms - piece.from.time_ms);
    return from + (until - from) * share;
  }

  static double trapezoid(const FlowPiece& piece, std::int64_t begin, std::int64_t end, double from,
                          double until) {
    return (between(piece, begin, from, until) + between(piece, end, from, until)) / 2;
  }

  void note(const FlowPoint& point) {
    mean_.flags |= point.flags;
    worst_ = worse(worst_, point.quality);
    for (const int curve : {point.outgoing, point.curve}) {
      const bool held = std::find(mean_.curves.begin(), mean_.curves.end(), curve) != mean_.curves.end();
      if (curve != 0 && !held) mean_.curves.push_back(curve);
    }
  }

  [[nodiscard]] DayMean without_mean() {
    mean_.flags = bit(Flag::gap);
    mean_.quality = Quality::missing;
    return mean_;
  }

  std::int64_t from_ms_;
  DayMean mean_;
  Quality worst_ = Quality::unchecked;
  double volume_ = 0;  // m3/s times ms
  double spread_ = 0;  // its sd, which is linear between the ends of a piece as the flow is
  std::int64_t covered_ms_ = 0;
};

}  // namespace

void Replayer::day_means(StationDay from, StationDay until,
                         const std::function<void(const DayMean&)>& sink) const {
  if (until <= from) return;
  const StationClock& clock = inputs_->clock;
  const double least_share = inputs_->settings.least_share_of_day;
  const auto begin = [&](StationDay day) { return Day(day, to_ms(start_of(day, clock))); };
  Day day = begin(from);
  StationDay number = from;
  const auto next = [&] {
    sink(day.finish(least_share));
    ++number.number;
    day = begin(number);
  };
  pieces(start_of(from, clock), start_of(until, clock), [&](const FlowPiece& piece) {
    while (piece.from.time_ms >= day.until_ms()) next();
    day.add(piece);
    // A long piece goes on into the days that follow.
    while (piece.until.time_ms > day.until_ms() && number.number + 1 < until.number) {
      next();
      day.add(piece);
    }
  });
  while (number < until) next();
}

}  // namespace scourbook::replay
