#include <algorithm>
#include <cmath>
#include <limits>

#include "replay/inputs.hpp"

namespace scourbook::replay {
namespace {

/// A reading with its flow, where it has one.
struct ReadingPoint {
  FlowPoint flow;
  bool has_flow = false;
  Quality stage_quality = Quality::unchecked;
};

FlowPoint point_of(const FlowBlock& block, std::size_t i) {
  return {block.time_ms[i], block.level_m[i], block.discharge_m3s[i], block.sd_ln_q[i],
          block.flags[i],   block.quality[i], block.curve[i],         0};
}

}  // namespace

/// Joins readings in order of time into pieces.
class PieceMaker {
 public:
  PieceMaker(const Inputs& inputs, const std::function<void(const FlowPiece&)>& sink)
      : inputs_(inputs), sink_(sink), longest_gap_ms_(inputs.settings.longest_gap_minutes * 60'000) {}

  void add(const ReadingPoint& reading) {
    if (has_last_ && reading.flow.time_ms - last_.flow.time_ms <= longest_gap_ms_) join(last_, reading);
    last_ = reading;
    has_last_ = true;
  }

 private:
  void join(const ReadingPoint& a, const ReadingPoint& b) const {
    const auto& boundaries = inputs_.timeline.boundaries();
    auto boundary = std::upper_bound(boundaries.begin(), boundaries.end(), a.flow.time_ms);
    const Quality stage_quality = worse(a.stage_quality, b.stage_quality);
    std::optional<FlowPoint> open;
    if (a.has_flow) open = a.flow;
    // One boundary at b itself too: the piece that ends there belongs to the period before.
    for (; boundary != boundaries.end() && *boundary <= b.flow.time_ms; ++boundary) {
      const double level_m =
          *boundary == b.flow.time_ms ? b.flow.level_m : level_between(a.flow, b.flow, *boundary);
      const auto close = read(inputs_.timeline.at(*boundary - 1), *boundary, level_m, stage_quality);
      if (open && close) sink_({*open, *close});
      open = read(inputs_.timeline.at(*boundary), *boundary, level_m, stage_quality);
    }
    if (open && b.has_flow && open->time_ms < b.flow.time_ms) sink_({*open, b.flow});
  }

  static double level_between(const FlowPoint& a, const FlowPoint& b, std::int64_t time_ms) {
    const double share =
        static_cast<double>(time_ms - a.time_ms) / static_cast<double>(b.time_ms - a.time_ms);
    return a.level_m + (b.level_m - a.level_m) * share;
  }

  /// The curves of a stretch read at one level: what a reading there would give.
  std::optional<FlowPoint> read(const Stretch* stretch, std::int64_t time_ms, double level_m,
                                Quality stage_quality) const {
    if (stretch == nullptr) return {};
    FlowColumns flow(1);
    inputs_.through(*stretch, std::span(&time_ms, 1), std::span(&level_m, 1), flow.spans());
    return FlowPoint{time_ms,
                     level_m,
                     flow.discharge_m3s[0],
                     flow.sd_ln_q[0],
                     flow.flags[0],
                     worse(flow.quality[0], stage_quality),
                     stretch->curve->number,
                     stretch->outgoing == nullptr ? 0 : stretch->outgoing->number};
  }

  const Inputs& inputs_;
  const std::function<void(const FlowPiece&)>& sink_;
  std::int64_t longest_gap_ms_;
  ReadingPoint last_;
  bool has_last_ = false;
};

void Replayer::pieces(Instant from, Instant until, const std::function<void(const FlowPiece&)>& sink) const {
  // The neighbours of the first and last reading inside lie at most one longest gap outside.
  const std::chrono::minutes margin(inputs_->settings.longest_gap_minutes);
  const std::function<void(const FlowPiece&)> overlapping = [&](const FlowPiece& piece) {
    if (piece.until.time_ms > to_ms(from) && piece.from.time_ms < to_ms(until)) sink(piece);
  };
  PieceMaker maker(*inputs_, overlapping);
  for (const UtcMonth month : inputs_->months(from - margin, until + margin)) {
    const store::StageBlock stage = inputs_->stage(month);
    const FlowBlock block = flows(stage);
    for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
      if (std::isnan(block.level_m[i])) continue;
      ReadingPoint reading{point_of(block, i), !std::isnan(block.discharge_m3s[i]), stage.quality[i]};
      if (has(block.flags[i], Flag::blended)) {
        reading.flow.outgoing = inputs_->timeline.at(block.time_ms[i])->outgoing->number;
      }
      maker.add(reading);
    }
  }
}

}  // namespace scourbook::replay
