// Flows and day means recomputed one at a time, written straight from the definitions, with std::pow; nothing
// of replay, history or rating is used for the expected values.

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#include "replay/replay.hpp"
#include "station_book.hpp"

using namespace station_book;

namespace {

constexpr std::int64_t kMinuteMs = 60'000;
constexpr std::int64_t kHourMs = 3'600'000;
constexpr std::int64_t kDayMs = 86'400'000;
constexpr std::int64_t kBlank = store::kMissing;

const store::Settings kSettings = [] {
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

std::vector<RatingCurve> curves_of_case() {
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

Case make_case() {
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

store::Book book_of(const Case& made, const std::string& path) {
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

double flow_of(const RatingCurve& c, double z) {
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

double sd_of(const RatingCurve& c, double z) {
  if (z <= c.bands.front().level_m) return c.bands.front().sd_ln_q;
  for (std::size_t i = 1; i < c.bands.size(); ++i) {
    const auto& a = c.bands[i - 1];
    const auto& b = c.bands[i];
    if (z <= b.level_m)
      return a.sd_ln_q + (b.sd_ln_q - a.sd_ln_q) * (z - a.level_m) / (b.level_m - a.level_m);
  }
  return c.bands.back().sd_ln_q;
}

Expected by_curve(const Case& made, int number, double z) {
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
std::optional<Expected> by_period(const Case& made, std::size_t p, std::int64_t ms, double z) {
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

std::optional<std::size_t> period_of(const Case& made, std::int64_t ms) {
  for (std::size_t p = 0; p < made.periods.size(); ++p) {
    const Period& now = made.periods[p];
    if (to_ms(now.from) <= ms && (!now.until || ms < to_ms(*now.until))) return p;
  }
  return {};
}

/// Integers of 1e-8 m added, then one division.
std::optional<double> level_of(const Case& made, const store::StageReading& reading) {
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

bool close(double a, double b, double relative) {
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

const Case& the_case() {
  static const Case made = make_case();
  return made;
}

/// One book for all tests of this file; they only read it.
const store::Book& the_book() {
  static const TemporaryPath path("replay");
  static const store::Book book = book_of(the_case(), path.text());
  return book;
}

const replay::Replayer& the_replayer() {
  static const replay::Replayer replayer(the_book(), history::view_of(the_book(), kStation));
  return replayer;
}

bool same_value(double a, double b) {
  return a == b || (std::isnan(a) && std::isnan(b));
}

}  // namespace

TEST_CASE("every flow agrees with the definitions to 1e-12") {
  const Case& made = the_case();
  std::size_t at_reading = 0;
  int flows = 0, blended = 0, none = 0, dry = 0, corrected = 0, above = 0;
  the_replayer().run(at("2019-01-01T00:00Z"), at("2021-01-01T00:00Z"), [&](const replay::FlowBlock& block) {
    for (std::size_t i = 0; i < block.time_ms.size(); ++i, ++at_reading) {
      const auto& reading = made.readings.at(at_reading);
      INFO(format_time(reading.time, UtcOffset{}));
      REQUIRE(block.time_ms[i] == to_ms(reading.time));
      const auto z = level_of(made, reading);
      REQUIRE(std::isnan(block.level_m[i]) == !z.has_value());
      if (z) REQUIRE(block.level_m[i] == *z);
      const auto p = period_of(made, block.time_ms[i]);
      const auto expected = z && p ? by_period(made, *p, block.time_ms[i], *z) : std::nullopt;
      if (!expected) {
        REQUIRE(std::isnan(block.discharge_m3s[i]));
        REQUIRE(block.flags[i] == bit(Flag::gap));
        REQUIRE(block.quality[i] == Quality::missing);
        REQUIRE(block.curve[i] == 0);
        REQUIRE(block.control[i] == -1);
        ++none;
        continue;
      }
      REQUIRE(close(block.discharge_m3s[i], expected->q, 1e-12));
      REQUIRE(close(block.sd_ln_q[i], expected->sd, 1e-12));
      REQUIRE(words(block.flags[i]) == words(expected->flags));
      REQUIRE(block.quality[i] == worse(expected->quality, worse(Quality::unchecked, reading.quality)));
      REQUIRE(block.curve[i] == expected->curve);
      ++flows;
      blended += has(expected->flags, Flag::blended);
      dry += has(expected->flags, Flag::no_flow);
      above += expected->quality == Quality::poor;
      corrected += reading.time >= made.corrections[0].from && reading.time < made.corrections[0].until;
    }
  });
  CHECK(at_reading == made.readings.size());
  // The case holds what it is meant to hold.
  CHECK(flows > 10'000);
  CHECK(blended > 300);
  CHECK(none > 300);
  CHECK(dry > 50);
  CHECK(above > 20);
  CHECK(corrected > 800);
}

TEST_CASE("day means agree with a sum over 5-second cells") {
  const Case& made = the_case();
  const StationDay first = day_of(at("2019-10-25T00:00Z"), made.clock);
  const StationDay end = day_of(at("2020-03-25T00:00Z"), made.clock);
  // Every reading and boundary lies on a whole cell, so the middle of a cell is its mean.
  constexpr std::int64_t kCell = 5'000;
  Between between(made);
  int whole = 0, part = 0, missing = 0, expected_day = first.number;
  the_replayer().day_means(first, end, [&](const replay::DayMean& mean) {
    INFO(format_day(mean.day));
    REQUIRE(mean.day.number == expected_day++);
    const std::int64_t begin = to_ms(start_of(mean.day, made.clock));
    REQUIRE((begin - 6 * kHourMs) % kDayMs == 0);  // 07:00 in the station's clock is 06:00 UTC
    double sum = 0, spread = 0;
    std::int64_t cells = 0;
    Flags flags = 0;
    Quality quality = Quality::unchecked;
    std::vector<int> curves;
    for (std::int64_t t = begin; t < begin + kDayMs; t += kCell) {
      const auto& span = between.around(t);
      if (!span.first) continue;
      // Flow, and flow times its sd, are linear in time within the span.
      const double width = double(span.end - span.begin);
      const double x = (double(t - span.begin) + kCell / 2.0) / width;
      sum += span.first->q + (span.last->q - span.first->q) * x;
      ++cells;
      flags = Flags(flags | span.first->flags | span.last->flags);
      quality = worse(quality, worse(span.stage, worse(span.first->quality, span.last->quality)));
      for (const int c : {span.first->outgoing, span.first->curve, span.last->outgoing, span.last->curve}) {
        if (c != 0 && std::find(curves.begin(), curves.end(), c) == curves.end()) curves.push_back(c);
      }
      const double first_sd = span.first->q * span.first->sd;
      spread += first_sd + (span.last->q * span.last->sd - first_sd) * x;
    }
    const double share = double(cells) / double(kDayMs / kCell);
    REQUIRE(mean.share == Approx(share).epsilon(1e-12).margin(1e-15));
    REQUIRE(mean.mean_m3s.has_value() == (share >= 0.7));
    if (share < 0.7) {
      REQUIRE(mean.flags == bit(Flag::gap));
      REQUIRE(mean.quality == Quality::missing);
      ++missing;
      return;
    }
    const double expected = sum / double(cells);
    REQUIRE(close(*mean.mean_m3s, expected, 1e-11));
    REQUIRE(close(mean.sd_ln_q, sum > 0 ? spread / sum : 0, 1e-11));
    flags = Flags(flags & ~bit(Flag::no_flow));
    if (sum == 0) flags |= bit(Flag::no_flow);
    if (share < 1) {
      flags |= bit(Flag::gap);
      quality = worse(quality, Quality::estimate);
    }
    REQUIRE(words(mean.flags) == words(flags));
    REQUIRE(mean.quality == quality);
    REQUIRE(mean.curves == curves);
    (share < 1 ? part : whole)++;
  });
  CHECK(expected_day == end.number);
  CHECK(whole > 80);
  CHECK(part > 10);
  CHECK(missing > 10);
}

TEST_CASE("the same flows whatever range is asked") {
  std::vector<std::int64_t> times;
  std::vector<double> flows;
  const auto& replayer = the_replayer();
  replayer.run(at("2019-01-01T00:00Z"), at("2021-01-01T00:00Z"), [&](const replay::FlowBlock& block) {
    times.insert(times.end(), block.time_ms.begin(), block.time_ms.end());
    flows.insert(flows.end(), block.discharge_m3s.begin(), block.discharge_m3s.end());
  });
  std::mt19937 engine(7);
  for (int round = 0; round < 60; ++round) {
    const std::int64_t from = times.front() + std::int64_t(engine() % 140) * kDayMs + engine() % kDayMs;
    const std::int64_t until = from + std::int64_t(engine() % 40) * kDayMs / (1 + engine() % 30);
    std::size_t i = std::size_t(std::lower_bound(times.begin(), times.end(), from) - times.begin());
    const auto end =
        std::size_t(std::lower_bound(times.begin(), times.end(), std::max(from, until)) - times.begin());
    replayer.run(from_ms(from), from_ms(until), [&](const replay::FlowBlock& block) {
      for (std::size_t k = 0; k < block.time_ms.size(); ++k, ++i) {
        REQUIRE(block.time_ms[k] == times.at(i));
        REQUIRE(same_value(block.discharge_m3s[k], flows[i]));
      }
    });
    REQUIRE(i == end);
  }
}

TEST_CASE("a day's mean does not depend on the days around it") {
  const StationDay first = day_of(at("2019-10-28T00:00Z"), the_case().clock);
  const StationDay end = day_of(at("2020-03-22T00:00Z"), the_case().clock);
  the_replayer().day_means(first, end, [&](const replay::DayMean& mean) {
    int days = 0;
    the_replayer().day_means(mean.day, {mean.day.number + 1}, [&](const replay::DayMean& alone) {
      ++days;
      REQUIRE(alone.day == mean.day);
      REQUIRE(alone.mean_m3s == mean.mean_m3s);
      REQUIRE(alone.sd_ln_q == mean.sd_ln_q);
      REQUIRE(alone.flags == mean.flags);
      REQUIRE(alone.quality == mean.quality);
      REQUIRE(alone.share == mean.share);
      REQUIRE(alone.curves == mean.curves);
    });
    REQUIRE(days == 1);
  });
}

TEST_CASE("pieces touch, rise, and do not cross a boundary") {
  std::int64_t last = INT64_MIN;
  int cut = 0;
  the_replayer().pieces(at("2019-11-20T00:00Z"), at("2020-03-01T00:00Z"),
                        [&](const replay::FlowPiece& piece) {
                          REQUIRE(piece.from.time_ms < piece.until.time_ms);
                          REQUIRE(piece.from.time_ms >= last);
                          last = piece.until.time_ms;
                          REQUIRE(piece.from.curve == piece.until.curve);
                          for (const Period& period : the_case().periods) {
                            const std::int64_t from = to_ms(period.from);
                            REQUIRE_FALSE((piece.from.time_ms < from && from < piece.until.time_ms));
                            cut += piece.until.time_ms == from;
                          }
                        });
  CHECK(cut >= 5);
}

TEST_CASE("a replay keeps a digest for every month with readings, the same each time") {
  const auto view = history::view_of(the_book(), kStation);
  std::vector<std::int64_t> done;
  const auto record = replay::make_replay(the_book(), view, at("2019-11-12T00:00Z"), at("2020-02-03T00:00Z"),
                                          [&](std::int64_t months, std::int64_t all) {
                                            CHECK(all == 4);
                                            done.push_back(months);
                                          });
  CHECK(done == std::vector<std::int64_t>{1, 2, 3, 4});
  CHECK(record.edition == 1);
  CHECK(record.data_version == view.data_version);
  CHECK(record.from == at("2019-11-12T00:00Z"));
  REQUIRE(record.months.size() == 4);
  CHECK(format_month(record.months.front().month) == "2019-11");
  const auto again = replay::make_replay(the_book(), view, at("2020-01-31T00:00Z"), at("2020-02-01T00:00Z"));
  REQUIRE(again.months.size() == 1);  // until is not in the range
  CHECK(again.months[0].sha256 == record.months[2].sha256);
  CHECK(again.months[0].values == record.months[2].values);
  CHECK(again.months[0].sha256 != record.months[1].sha256);
}
