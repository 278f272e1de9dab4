#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <cstring>

#include "history/adopt.hpp"
#include "publish/rounding.hpp"
#include "publish/trace_parts.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

bool same_bits(const std::optional<double>& a, const std::optional<double>& b) {
  if (a.has_value() != b.has_value()) return false;
  return !a || std::memcmp(&*a, &*b, sizeof *a) == 0;
}

class ValueTracer {
 public:
  ValueTracer(const store::Book& book, const TraceRequest& request)
      : book_(book),
        state_(state_of(book, request)),
        again_(book, state_.view),
        clock_(book.station(request.station, request.known)->value.clock) {
    out_.station = request.station;
    out_.time = request.time;
    out_.view = state_.view;
    out_.edition_act = state_.view.edition->act;
    out_.decimals = static_cast<int>(state_.settings.published_decimals);
    out_.digits = state_.settings.published_digits;
  }

  TracedValue run() {
    set_period();
    const auto origin = book_.reading_origin(out_.station, out_.time, data());
    if (origin) {
      at_reading();
    } else {
      between_readings();
    }
    set_replayed(origin.has_value());
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
  [[nodiscard]] Known data() const { return Known{state_.view.data_version}; }

  void set_period() {
    const auto& periods = state_.view.edition->periods;
    const int at = history::period_at(periods, out_.time);
    if (at < 0) {
      out_.no_flow_because = "no period of the edition holds this time";
      return;
    }
    out_.period = periods[static_cast<std::size_t>(at)];
    if (!out_.period.curve) {
      out_.no_flow_because = fmt::format("the period has no curve: {}", word(out_.period.none));
    }
  }

  void at_reading() {
    const auto readings = again_.readings(out_.time, out_.time);
    add_reading(out_.time);
    if (readings.empty()) {
      const bool zero = again_.datum().zero_at(out_.time).has_value();
      because(zero ? "the reading at this time is missing" : "there is no gauge zero yet at this time");
      return;
    }
    if (!out_.no_flow_because.empty()) return;
    const LevelReading& reading = readings.front();
    auto value = again_.at(reading.time_ms, reading.time_ms, reading.level.metres());
    if (!value) return;
    out_.recomputed_m3s = value->discharge_m3s;
    out_.curves = std::move(value->curves);
  }

  void between_readings() {
    const auto margin = Millis(again_.longest_gap_ms());
    const auto readings = again_.readings(out_.time - margin, out_.time + margin);
    const auto after = std::find_if(readings.begin(), readings.end(),
                                    [&](const LevelReading& r) { return r.time_ms > to_ms(out_.time); });
    if (after == readings.begin() || after == readings.end()) {
      because(fmt::format("there is no reading on both sides within the longest gap of {} minutes",
                          again_.longest_gap_ms() / 60'000));
      return;
    }
    const LevelReading& a = *std::prev(after);
    const LevelReading& b = *after;
    add_reading(from_ms(a.time_ms));
    add_reading(from_ms(b.time_ms));
    if (b.time_ms - a.time_ms > again_.longest_gap_ms()) {
      because(
          fmt::format("the readings around it lie {} minutes apart, more than the longest gap of {} minutes",
                      (b.time_ms - a.time_ms) / 60'000, again_.longest_gap_ms() / 60'000));
      return;
    }
    if (!out_.no_flow_because.empty()) return;
    for (Segment& segment : again_.between(a, b)) {
      if (to_ms(out_.time) < segment.from_ms || to_ms(out_.time) >= segment.until_ms) continue;
      const double share = static_cast<double>(to_ms(out_.time) - segment.from_ms) /
                           static_cast<double>(segment.until_ms - segment.from_ms);
      const double from = segment.from.discharge_m3s, until = segment.until.discharge_m3s;
      out_.recomputed_m3s = from + (until - from) * share;
      out_.curves = std::move(segment.from.curves);
      for (TracedCurve& curve : segment.until.curves) out_.curves.push_back(std::move(curve));
    }
  }

  void because(const std::string& reason) {
    if (out_.no_flow_because.empty()) out_.no_flow_because = reason;
  }

  void add_reading(Instant time) {
    const auto origin = book_.reading_origin(out_.station, time, data());
    if (!origin) return;
    TracedReading reading;
    reading.time = time;
    reading.recorded = origin->recorded;
    if (reading.recorded != "missing")
      reading.recorded += origin->unit == store::StageUnit::metre ? " m" : " ft";
    reading.quality = origin->quality;
    reading.file_number = origin->file;
    reading.line = origin->line;
    reading.act = origin->act;
    if (const auto file = book_.file(origin->file)) {
      reading.file = file->name;
      reading.file_sha256 = file->sha256;
    }
    const auto held = again_.readings(time, time);
    if (!held.empty()) {
      reading.has_level = true;
      reading.stage = held.front().stage;
      reading.level = held.front().level;
      reading.correction = again_.datum().correction_at(time);
    }
    set_zero(reading);
    acts_.add(reading.act);
    out_.readings.push_back(std::move(reading));
  }

  void set_zero(TracedReading& reading) {
    for (const auto& row : book_.gauge_zeros(out_.station, data())) {
      if (row.value.valid_from > reading.time) break;
      reading.gauge_zero = row.value.zero;
      reading.gauge_zero_source = row.source;
      reading.gauge_zero_file = file_name(book_, row.source.file);
    }
    for (const auto& row : book_.gauge_zeros(out_.station, data())) {
      if (row.value.valid_from <= reading.time) acts_.add(row.act);
    }
    for (const auto& row : book_.stage_corrections(out_.station, data())) {
      if (row.value.from <= reading.time && reading.time < row.value.until) acts_.add(row.act);
    }
  }

  /// What the replay's own loops say of that time.
  void set_replayed(bool at_a_reading) {
    const replay::Replayer replayer(book_, state_.view);
    out_.flags = bit(Flag::gap);
    if (at_a_reading) {
      replayer.run(out_.time, out_.time + Millis(1), [&](const replay::FlowBlock& block) {
        if (!std::isnan(block.discharge_m3s[0])) out_.discharge_m3s = block.discharge_m3s[0];
        out_.sd_ln_q = block.sd_ln_q[0];
        out_.flags = block.flags[0];
        out_.quality = block.quality[0];
      });
      return;
    }
    replayer.pieces(out_.time, out_.time + Millis(1), [&](const replay::FlowPiece& piece) {
      if (to_ms(out_.time) < piece.from.time_ms || to_ms(out_.time) >= piece.until.time_ms) return;
      const double share = static_cast<double>(to_ms(out_.time) - piece.from.time_ms) /
                           static_cast<double>(piece.until.time_ms - piece.from.time_ms);
      const auto between = [&](double from, double until) { return from + (until - from) * share; };
      out_.discharge_m3s = between(piece.from.discharge_m3s, piece.until.discharge_m3s);
      const double spread = between(piece.from.discharge_m3s * piece.from.sd_ln_q,
                                    piece.until.discharge_m3s * piece.until.sd_ln_q);
      out_.sd_ln_q = *out_.discharge_m3s > 0 ? spread / *out_.discharge_m3s : 0;
      out_.flags = piece.from.flags | piece.until.flags;
      if (*out_.discharge_m3s > 0) out_.flags &= static_cast<Flags>(~bit(Flag::no_flow));
      out_.quality = worse(piece.from.quality, piece.until.quality);
    });
  }

  void set_published() {
    if (out_.recomputed_m3s) out_.recomputed_units = as_published(*out_.recomputed_m3s, state_.settings);
    if (!state_.publication) return;
    const store::Publication& publication = *state_.publication;
    out_.publication = publication.number;
    out_.publication_act = publication.act;
    out_.replay = publication.replay;
    out_.decimals = publication.decimals;
    for (const auto& month : publication.months) {
      const auto at = std::lower_bound(month.time_ms.begin(), month.time_ms.end(), to_ms(out_.time));
      if (at == month.time_ms.end() || *at != to_ms(out_.time)) continue;
      out_.published_units = month.value[static_cast<std::size_t>(at - month.time_ms.begin())];
    }
  }

  const store::Book& book_;
  TracedState state_;
  Recomputer again_;
  StationClock clock_;
  TracedValue out_;
  ActNumbers acts_;
};

}  // namespace

bool TracedValue::agrees() const {
  if (!same_bits(discharge_m3s, recomputed_m3s)) return false;
  // Between readings nothing was published as such.
  return !publication || readings.size() > 1 || published_units == recomputed_units;
}

TracedValue trace_value(const store::Book& book, const TraceRequest& request) {
  return ValueTracer(book, request).run();
}

}  // namespace scourbook::publish
