#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "history/adopt.hpp"
#include "publish/rounding.hpp"
#include "publish/trace_parts.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

class ValueTracer {
 public:
  ValueTracer(const store::Book& book, const TraceRequest& request)
      : book_(book), state_(state_of(book, request)), again_(book, state_.made) {
    out_.station = request.station;
    out_.time = request.time;
    out_.view = state_.view;
    out_.edition_act = state_.view.edition->act;
    out_.decimals = static_cast<int>(state_.settings.published_decimals);
    out_.digits = state_.settings.published_digits;
  }

  TracedValue run() {
    set_period();
    const bool is_reading = book_.reading_origin(out_.station, out_.time, data()).has_value();
    if (is_reading) {
      at_reading();
    } else {
      between_readings();
    }
    set_replayed(is_reading);
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
  [[nodiscard]] Known data() const { return Known{state_.view.data_version}; }

  void set_period() {
    const auto& edition = *state_.view.edition;
    const int at = history::period_at(edition.periods, out_.time);
    if (at < 0) {
      because(fmt::format("no period of edition {} holds this time", edition.number));
      return;
    }
    out_.period = edition.periods[static_cast<std::size_t>(at)];
    if (!out_.period.curve) because(fmt::format("the period has no curve: {}", word(out_.period.none)));
  }

  void at_reading() {
    add_reading(out_.time);
    const auto readings = again_.readings(out_.time, out_.time);
    if (readings.empty()) {
      because(has_gauge_zero() ? "the reading at this time is missing" : "it is before the first gauge zero");
    }
    if (!out_.no_flow_because.empty()) return;
    const LevelReading& reading = readings.front();
    auto value = again_.at(reading.time_ms, reading.time_ms, reading.level.metres());
    if (!value) return;
    out_.recomputed_m3s = value->discharge_m3s;
    out_.curves = std::move(value->curves);
  }

  void between_readings() {
    const auto before = again_.last_before(out_.time);
    const auto after = again_.first_after(out_.time);
    if (before) add_reading(from_ms(before->time_ms));
    if (after) add_reading(from_ms(after->time_ms));
    because(without_neighbours(before, after));
    if (!out_.no_flow_because.empty()) return;
    for (Segment& segment : again_.between(*before, *after)) {
      if (to_ms(out_.time) < segment.from_ms || to_ms(out_.time) >= segment.until_ms) continue;
      const double share = static_cast<double>(to_ms(out_.time) - segment.from_ms) /
                           static_cast<double>(segment.until_ms - segment.from_ms);
      const double from = segment.from.discharge_m3s, until = segment.until.discharge_m3s;
      out_.recomputed_m3s = from + (until - from) * share;
      out_.curves = std::move(segment.from.curves);
      for (TracedCurve& curve : segment.until.curves) out_.curves.push_back(std::move(curve));
    }
  }

  /// Why there is no flow between two neighbours; empty where there may be one.
  [[nodiscard]] std::string without_neighbours(const std::optional<LevelReading>& before,
                                               const std::optional<LevelReading>& after) const {
    if (!has_gauge_zero()) return "it is before the first gauge zero";
    if (!before && !after) return "there are no readings";
    const auto shown = [&](const LevelReading& reading) {
      return format_time(from_ms(reading.time_ms), state_.clock.offset);
    };
    if (!before) return "it is before the first reading, of " + shown(*after);
    if (!after) return "it is after the last reading, of " + shown(*before);
    const std::int64_t gap_ms = after->time_ms - before->time_ms;
    if (gap_ms <= again_.longest_gap_ms()) return {};
    return fmt::format("gap of {} between readings; flow is joined over at most {}", hours(gap_ms),
                       hours(again_.longest_gap_ms()));
  }

  /// "6 h", "2.25 h".
  [[nodiscard]] static std::string hours(std::int64_t ms) {
    return fmt::format("{:.4g} h", static_cast<double>(ms) / 3'600'000);
  }

  [[nodiscard]] bool has_gauge_zero() const { return again_.datum().zero_at(out_.time).has_value(); }

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
    for (const auto& row : book_.gauge_zeros(out_.station, data())) {
      if (row.value.valid_from > time) break;
      reading.gauge_zero = row.value.zero;
      reading.gauge_zero_source = row.source;
      reading.gauge_zero_file = file_name(book_, row.source.file);
    }
    acts_.add(reading.act);
    add_level_acts(book_, state_.view, time, time, acts_);
    out_.readings.push_back(std::move(reading));
  }

  /// What the replay's own loops say of that time.
  void set_replayed(bool at_a_reading) {
    const replay::Replayer replayer(book_, state_.made);
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
      const auto index = static_cast<std::size_t>(at - month.time_ms.begin());
      out_.published_units = month.value[index];
      out_.quality = month.quality[index];
    }
  }

  const store::Book& book_;
  TracedState state_;
  Recomputer again_;
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
