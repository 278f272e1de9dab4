#include <algorithm>
#include <cmath>
#include <set>

#include "publish/rounding.hpp"
#include "publish/trace_parts.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

/// Relative difference that two ways of summing a day may have.
constexpr double kSumming = 1e-12;

class DayTracer {
 public:
  DayTracer(const store::Book& book, const TraceRequest& request)
      : book_(book),
        state_(state_of(book, request)),
        again_(book, state_.view),
        clock_(book.station(request.station, request.known)->value.clock) {
    out_.station = request.station;
    out_.day = day_of(request.time, clock_);
    out_.view = state_.view;
    out_.decimals = static_cast<int>(state_.settings.published_decimals);
    out_.digits = state_.settings.published_digits;
    begin_ms_ = to_ms(start_of(out_.day, clock_));
    end_ms_ = to_ms(start_of(StationDay{out_.day.number + 1}, clock_));
  }

  TracedDay run() {
    recompute();
    const replay::Replayer replayer(book_, state_.view);
    replayer.day_means(out_.day, StationDay{out_.day.number + 1}, [&](const replay::DayMean& mean) {
      out_.mean_m3s = mean.mean_m3s;
      out_.share = mean.share;
      out_.sd_ln_q = mean.sd_ln_q;
      out_.flags = mean.flags;
      out_.quality = mean.quality;
    });
    set_published();
    for (TracedCurve& curve : out_.curves) {
      complete(book_, state_.view, curve);
      add_acts(book_, out_.station, curve, acts_);
    }
    add_acts(book_, state_, acts_);
    out_.acts = acts_.load(book_);
    return std::move(out_);
  }

 private:
  /// Every reading of the day and its neighbours, joined by the definitions.
  void recompute() {
    const auto margin = Millis(again_.longest_gap_ms());
    const auto readings = again_.readings(from_ms(begin_ms_) - margin, from_ms(end_ms_) + margin);
    double volume = 0;
    std::int64_t covered_ms = 0;
    std::set<std::int64_t> used;
    for (std::size_t i = 0; i + 1 < readings.size(); ++i) {
      if (readings[i + 1].time_ms <= begin_ms_ || readings[i].time_ms >= end_ms_) continue;
      for (const Segment& segment : again_.between(readings[i], readings[i + 1])) {
        const std::int64_t from = std::max(segment.from_ms, begin_ms_),
                           until = std::min(segment.until_ms, end_ms_);
        if (from >= until) continue;
        const TracedPiece piece = cut(segment, from, until);
        volume += (piece.from_m3s + piece.until_m3s) / 2 * static_cast<double>(until - from);
        covered_ms += until - from;
        out_.pieces.push_back(piece);
        add_curves(segment.from);
        add_curves(segment.until);
        used.insert(readings[i].time_ms);
        used.insert(readings[i + 1].time_ms);
      }
    }
    add_files(used);
    const double share = static_cast<double>(covered_ms) / static_cast<double>(end_ms_ - begin_ms_);
    if (covered_ms > 0 && share >= state_.settings.least_share_of_day) {
      out_.recomputed_m3s = volume / static_cast<double>(covered_ms);
    }
  }

  [[nodiscard]] static TracedPiece cut(const Segment& s, std::int64_t from, std::int64_t until) {
    const auto at = [&](std::int64_t time) {
      const double share =
          static_cast<double>(time - s.from_ms) / static_cast<double>(s.until_ms - s.from_ms);
      return s.from.discharge_m3s + (s.until.discharge_m3s - s.from.discharge_m3s) * share;
    };
    return {from_ms(from), from_ms(until), at(from), at(until), s.from.curves.back().curve.number};
  }

  void add_curves(const Evaluated& value) {
    for (const TracedCurve& curve : value.curves) {
      const bool held = std::any_of(out_.curves.begin(), out_.curves.end(), [&](const TracedCurve& c) {
        return c.curve.number == curve.curve.number;
      });
      if (held) continue;
      out_.curves.push_back(curve);
      out_.curves.back().controls.clear();
      out_.curves.back().level_m = 0;
      out_.curves.back().discharge_m3s = 0;
      out_.curves.back().weight = 1;
    }
  }

  void add_files(const std::set<std::int64_t>& times) {
    std::set<std::int64_t> files;
    for (const std::int64_t time : times) {
      const auto origin = book_.reading_origin(out_.station, from_ms(time), Known{state_.view.data_version});
      if (!origin) continue;
      files.insert(origin->file);
      acts_.add(origin->act);
    }
    for (const std::int64_t file : files) out_.files.push_back(file_name(book_, file));
    const Known data{state_.view.data_version};
    for (const auto& row : book_.gauge_zeros(out_.station, data)) {
      if (to_ms(row.value.valid_from) < end_ms_) acts_.add(row.act);
    }
    for (const auto& row : book_.stage_corrections(out_.station, data)) {
      if (to_ms(row.value.from) < end_ms_ && to_ms(row.value.until) > begin_ms_) acts_.add(row.act);
    }
  }

  void set_published() {
    if (out_.recomputed_m3s) out_.recomputed_units = as_published(*out_.recomputed_m3s, state_.settings);
    if (!state_.publication) return;
    out_.publication = state_.publication->number;
    out_.publication_act = state_.publication->act;
    out_.replay = state_.publication->replay;
    out_.decimals = state_.publication->decimals;
    for (const auto& day : state_.publication->days) {
      if (day.day == out_.day.number) out_.published_units = day.mean;
    }
  }

  const store::Book& book_;
  TracedState state_;
  Recomputer again_;
  StationClock clock_;
  TracedDay out_;
  ActNumbers acts_;
  std::int64_t begin_ms_ = 0, end_ms_ = 0;
};

}  // namespace

bool TracedDay::agrees() const {
  if (mean_m3s.has_value() != recomputed_m3s.has_value()) return false;
  if (mean_m3s && std::abs(*mean_m3s - *recomputed_m3s) > kSumming * std::abs(*mean_m3s)) return false;
  return !publication || published_units == recomputed_units;
}

TracedDay trace_day(const store::Book& book, const TraceRequest& request) {
  return DayTracer(book, request).run();
}

}  // namespace scourbook::publish
