// Flows and day means held against the definitions, value by value.

#include <catch2/catch.hpp>

#include "definitions.hpp"
#include "replay/replay.hpp"

using namespace definitions;

namespace {

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
