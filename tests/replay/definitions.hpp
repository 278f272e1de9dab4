#pragma once
// What replay must give, recomputed one value at a time, written straight from the definitions with std::pow;
// nothing of replay, history or rating is used. And a case that holds everything a replay must get right.

#include <algorithm>
#include <cmath>
#include <optional>
#include <random>
#include <vector>

#include "station_book.hpp"

namespace definitions {

using namespace station_book;

inline constexpr std::int64_t kMinuteMs = 60'000;
inline constexpr std::int64_t kHourMs = 3'600'000;
inline constexpr std::int64_t kDayMs = 86'400'000;
inline constexpr std::int64_t kBlank = store::kMissing;

inline const store::Settings kSettings = [] {
  store::Settings settings;
  settings.longest_gap_minutes = 300;
  settings.least_share_of_day = 0.7;
  settings.estimate_above_gauged = 1.25;
  settings.poor_above_lineage = 2;
  return settings;
}();

/// Everything that the book is filled with, kept aside for the recomputation.
struct Case {
  StationClock clock;
  std::vector<GaugeZeroRow> zeros;
  std::vector<StageCorrection> corrections;
  std::vector<RatingCurve> curves;
  std::vector<Period> periods;
  std::vector<store::StageReading> readings;
};

inline std::vector<RatingCurve> curves_of_case() {
  // 1: a crest below, a channel from the takeover up, a flood plain.
  RatingCurve weir =
      curve({control(ControlKind::section, 100.0, 1.5, 24.0), control(ControlKind::channel, 99.6, 1.8, 9.0),
             control(ControlKind::overbank, 102.2, 1.7, 31.0)});
  weir.takeover_level_m = 101.1;
  weir.gauged_low_m3s = 0.4;
  weir.gauged_high_m3s = 40;
  weir.lineage_high_m3s = 45;
  weir.surveyed_top_m = 102.9;
  // 2: a channel whose bed has risen; no gauging of its own, its survey carried.
  RatingCurve filled = curve({control(ControlKind::channel, 100.35, 1.75, 12.5)});
  filled.gauged_low_m3s = 0.4;
  filled.gauged_high_m3s = 40;
  filled.lineage_high_m3s = 45;
  filled.surveyed_top_m = 102.8;
  filled.inferred = true;
  filled.carried = true;
  filled.bands = {{100.3, 0.35}, {101.0, 0.09}, {102.75, 0.12}};
  // 3: section and channel that cross nowhere: the lesser flow. Gauged low only.
  RatingCurve scoured = curve(
      {control(ControlKind::section, 99.9, 1.55, 20.0), control(ControlKind::channel, 99.5, 1.62, 11.0)});
  scoured.gauged_low_m3s = 2;
  scoured.gauged_high_m3s = 14;
  return {weir, filled, scoured};
}

inline Case make_case() {
  Case made;
  made.clock.offset.minutes = std::chrono::minutes(60);
  made.clock.day_start = std::chrono::minutes(420);
  // The first readings have no gauge zero yet; the second levelling falls between two readings.
  made.zeros = {zero("2019-11-01T06:00Z", 99.123), zero("2019-12-20T10:07:30Z", 99.157)};
  made.corrections = {{kStation, at("2020-01-05T00:00Z"), at("2020-01-15T12:00Z"), HeightChange{},
                       HeightChange::from_ticks(-3'712'345), ""},
                      {kStation, at("2020-01-10T03:00Z"), at("2020-01-11T00:00Z"),
                       HeightChange::from_metres(0.011), HeightChange::from_metres(0.011), ""}};
  made.curves = curves_of_case();
  made.periods = {
      period(1, "2019-10-15T00:00Z", "2019-12-03T04:20:05Z"),                       // between two readings
      period(2, "2019-12-03T04:20:05Z", "2019-12-24T12:00Z", Millis(5 * kHourMs)),  // ends at a reading
      period({}, "2019-12-24T12:00Z", "2019-12-27T09:05Z"),
      period(2, "2019-12-27T09:05Z", "2019-12-30T00:00Z", Millis(kHourMs)),  // nothing to pass from: no blend
      period(3, "2019-12-30T00:00Z", "2020-02-01T00:00Z",
             Millis(4 * kDayMs)),  // over the end of a month and a year
      period(1, "2020-02-01T00:00Z", "2020-02-01T00:10Z", Millis(kHourMs)),  // cut inside its blend
      period(3, "2020-02-01T00:10Z", "2020-02-20T00:00Z"),
      period(1, "2020-02-22T00:07Z", "", Millis(3 * kHourMs)),  // after a gap: no blend
  };
  std::mt19937 engine(20260101);
  std::normal_distribution<double> noise(0, 0.004);
  double flood = 0;
  double fall = 0;
  for (std::int64_t ms = to_ms(at("2019-10-30T00:00Z")); ms < to_ms(at("2020-03-20T09:00Z"));
       ms += 15 * kMinuteMs) {
    const std::int64_t index = ms / (15 * kMinuteMs);
    if (engine() % 900 == 0) flood = 0.5 + 0.004 * double(engine() % 1000);
    fall += 0.15 * (flood - fall);
    flood *= 0.99;
    const double stage = 1.3 + 0.45 * std::sin(double(index) / 700.0) + fall + noise(engine);
    store::StageReading reading{from_ms(ms), std::llround(stage * 1000), Quality::unchecked, index % 100000};
    const auto roll = engine() % 1000;
    if (roll < 8) reading.value = kBlank;
    if (roll >= 8 && roll < 12) reading.quality = Quality::suspect;
    if (roll >= 12 && roll < 16) reading.quality = Quality::good;
    if (roll == 16) reading.quality = Quality::missing;
    if (roll == 17) reading.time += Millis(65'000);  // off the step
    if (roll >= 18 && roll < 21) {                   // hours without a row: up to 5 h, and beyond
      made.readings.push_back(reading);
      ms += static_cast<std::int64_t>(2 + engine() % 38) * 15 * kMinuteMs;
      continue;
    }
    made.readings.push_back(reading);
  }
  return made;
}

inline store::Book book_of(const Case& made, const std::string& path) {
  auto book = store::Book::create(path, head("new"), kSettings);
  add_ground(book, made.clock, made.zeros);
  add_curves(book, made.curves);
  add_edition(book, made.periods);
  add_stage(book, made.readings);
  auto writer = book.begin(head("corrections"));
  const auto file = writer.add_file("corrections.csv", 1, std::string(64, '0'), "stage correction");
  for (const auto& correction : made.corrections) writer.add(correction, {file, 2});
  writer.commit();
  return book;
}

// ---- the definitions
// ------------------------------------------------------------------------------------------

struct Expected {
  double q = 0, sd = 0;
  Flags flags = 0;
  Quality quality = Quality::unchecked;
  int curve = 0, outgoing = 0;
};

inline double flow_of(const RatingCurve& c, double z) {
  double section = INFINITY, channel = INFINITY, over = 0;
  for (const auto& part : c.controls) {
    const double d = z - part.h0_m;
    const double q = d > 0 ? part.flow_scale * std::pow(d, part.exponent) : 0;
    if (part.kind == ControlKind::section) section = q;
    if (part.kind == ControlKind::channel) channel = q;
    if (part.kind == ControlKind::overbank) over += q;
  }
  const bool channel_governs = std::isinf(section) || (c.takeover_level_m && z >= *c.takeover_level_m);
  return (channel_governs ? channel : std::min(section, channel)) + over;
}

inline double sd_of(const RatingCurve& c, double z) {
  if (z <= c.bands.front().level_m) return c.bands.front().sd_ln_q;
  for (std::size_t i = 1; i < c.bands.size(); ++i) {
    const auto& a = c.bands[i - 1];
    const auto& b = c.bands[i];
    if (z <= b.level_m)
      return a.sd_ln_q + (b.sd_ln_q - a.sd_ln_q) * (z - a.level_m) / (b.level_m - a.level_m);
  }
  return c.bands.back().sd_ln_q;
}

inline Expected by_curve(const Case& made, int number, double z) {
  const RatingCurve& c = made.curves.at(static_cast<std::size_t>(number - 1));
  Expected e;
  e.curve = number;
  e.q = flow_of(c, z);
  e.sd = e.q > 0 ? sd_of(c, z) : 0;
  if (c.gauged_low_m3s && e.q < *c.gauged_low_m3s) e.flags |= bit(Flag::below_gauged);
  if (c.gauged_high_m3s && e.q > *c.gauged_high_m3s) e.flags |= bit(Flag::above_gauged);
  if (z > c.surveyed_top_m) e.flags |= bit(Flag::above_surveyed);
  if (e.q == 0) e.flags |= bit(Flag::no_flow);
  if (c.inferred) e.flags |= bit(Flag::inferred);
  if (c.carried) e.flags |= bit(Flag::carried);
  if (c.inferred || (c.gauged_high_m3s && e.q > 1.25 * *c.gauged_high_m3s)) e.quality = Quality::estimate;
  if (z > c.surveyed_top_m || (c.lineage_high_m3s && e.q > 2 * *c.lineage_high_m3s))
    e.quality = Quality::poor;
  return e;
}

/// The flow that period `p` gives at `ms` and level z, also at its very end.
inline std::optional<Expected> by_period(const Case& made, std::size_t p, std::int64_t ms, double z) {
  const Period& now = made.periods[p];
  if (!now.curve) return {};
  Expected in = by_curve(made, *now.curve, z);
  const bool has_before = p > 0 && made.periods[p - 1].until == now.from && made.periods[p - 1].curve;
  // The end of the blend itself (seen from inside) has x = 1: the incoming curve alone, by either reading.
  if (!has_before || ms >= to_ms(now.from) + now.blend.count()) return in;
  const Expected out = by_curve(made, *made.periods[p - 1].curve, z);
  const double x = double(ms - to_ms(now.from)) / double(now.blend.count());
  Expected e = in;
  e.outgoing = out.curve;
  e.q = (1 - x) * out.q + x * in.q;
  e.sd = e.q > 0 ? ((1 - x) * out.q * out.sd + x * in.q * in.sd) / e.q : 0;
  e.flags = (in.flags | out.flags | bit(Flag::blended)) & ~bit(Flag::no_flow);
  if (e.q == 0) e.flags |= bit(Flag::no_flow);
  e.quality = worse(Quality::estimate, worse(in.quality, out.quality));
  return e;
}

inline std::optional<std::size_t> period_of(const Case& made, std::int64_t ms) {
  for (std::size_t p = 0; p < made.periods.size(); ++p) {
    const Period& now = made.periods[p];
    if (to_ms(now.from) <= ms && (!now.until || ms < to_ms(*now.until))) return p;
  }
  return {};
}

/// Integers of 1e-8 m added, then one division.
inline std::optional<double> level_of(const Case& made, const store::StageReading& reading) {
  if (reading.value == kBlank || reading.quality == Quality::missing) return {};
  std::optional<std::int64_t> ticks;
  for (const auto& zero : made.zeros) {
    if (zero.valid_from <= reading.time) ticks = zero.zero.ticks();
  }
  if (!ticks) return {};
  *ticks += reading.value * 100'000;
  for (const auto& c : made.corrections) {
    if (reading.time < c.from || reading.time >= c.until) continue;
    const double share = double((reading.time - c.from).count()) / double((c.until - c.from).count());
    *ticks += std::llround(double(c.add_at_from.ticks()) +
                           double(c.add_at_until.ticks() - c.add_at_from.ticks()) * share);
  }
  return double(*ticks) / 1e8;
}

inline bool close(double a, double b, double relative) {
  return std::abs(a - b) <= relative * std::max(std::abs(a), std::abs(b));
}

/// A reading that counts: time and level.
struct Point {
  std::int64_t ms;
  double z;
  Quality stage;
};

/// The flow between readings, at an instant strictly between whole seconds.
class Between {
 public:
  explicit Between(const Case& made) : made_(made) {
    for (const auto& reading : made.readings) {
      const auto z = level_of(made, reading);
      if (z) points_.push_back({to_ms(reading.time), *z, reading.quality});
    }
    for (const auto& now : made.periods) {
      boundaries_.push_back(to_ms(now.from));
      if (now.until) boundaries_.push_back(to_ms(*now.until));
    }
  }

  struct Span {
    std::int64_t begin = 0, end = 0;
    std::optional<Expected> first, last;
    Quality stage = Quality::unchecked;
  };

  /// The span of linear flow around `ms`; `first` empty where there is no flow. Times of asking must rise.
  const Span& around(std::int64_t ms) {
    if (ms >= span_.begin && ms < span_.end) return span_;
    while (next_ < points_.size() && points_[next_].ms <= ms) ++next_;
    span_ = {};
    if (next_ == 0 || next_ == points_.size()) return span_;
    const Point& a = points_[next_ - 1];
    const Point& b = points_[next_];
    if (b.ms - a.ms > kSettings.longest_gap_minutes * kMinuteMs) return span_;
    const auto p = period_of(made_, ms);
    if (!p) return span_;
    std::int64_t begin = a.ms, end = b.ms;
    for (const std::int64_t boundary : boundaries_) {
      if (boundary <= ms) begin = std::max(begin, boundary);
      if (boundary > ms) end = std::min(end, boundary);
    }
    const auto z = [&](std::int64_t t) {
      return a.z + (b.z - a.z) * (double(t - a.ms) / double(b.ms - a.ms));
    };
    span_ = {begin, end, by_period(made_, *p, begin, begin == a.ms ? a.z : z(begin)),
             by_period(made_, *p, end, end == b.ms ? b.z : z(end)), worse(a.stage, b.stage)};
    return span_;
  }

 private:
  const Case& made_;
  std::vector<Point> points_;
  std::vector<std::int64_t> boundaries_;
  std::size_t next_ = 0;
  Span span_;
};

}  // namespace definitions
