#include <algorithm>
#include <set>

#include "publish/rounding.hpp"
#include "publish/trace_parts.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

class DayTracer {
 public:
  DayTracer(const store::Book& book, const TraceRequest& request)
      : book_(book), state_(state_of(book, request)), again_(book, state_.made) {
    out_.station = request.station;
    out_.day = day_of(request.time, state_.clock);
    out_.view = state_.view;
    out_.decimals = static_cast<int>(state_.settings.published_decimals);
    out_.digits = state_.settings.published_digits;
    begin_ms_ = to_ms(start_of(out_.day, state_.clock));
    end_ms_ = to_ms(start_of(StationDay{out_.day.number + 1}, state_.clock));
  }

  TracedDay run() {
    recompute();
    const replay::Replayer replayer(book_, state_.made);
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
      add_acts(book_, curve.curve, curve.act, acts_);
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

  /// The part of a segment in [from, until): its ends read off the line, and exactly theirs where they are.
  [[nodiscard]] static TracedPiece cut(const Segment& s, std::int64_t from, std::int64_t until) {
    const double first = s.from.discharge_m3s, last = s.until.discharge_m3s;
    const auto at = [&](std::int64_t time) {
      if (time == s.until_ms) return last;
      const double share =
          static_cast<double>(time - s.from_ms) / static_cast<double>(s.until_ms - s.from_ms);
      return first + (last - first) * share;
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
    if (!times.empty()) {
      add_level_acts(book_, state_.view, from_ms(*times.begin()), from_ms(*times.rbegin()), acts_);
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
      if (day.day != out_.day.number) continue;
      out_.published_units = day.mean;
      out_.quality = day.quality;
    }
  }

  const store::Book& book_;
  TracedState state_;
  Recomputer again_;
  TracedDay out_;
  ActNumbers acts_;
  std::int64_t begin_ms_ = 0, end_ms_ = 0;
};

}  // namespace

bool TracedDay::agrees() const {
  if (!same_bits(mean_m3s, recomputed_m3s)) return false;
  return !publication || published_units == recomputed_units;
}

TracedDay trace_day(const store::Book& book, const TraceRequest& request) {
  return DayTracer(book, request).run();
}

}  // namespace scourbook::publish
