// A decade of 15-minute stage through three curves (section, channel and overbank), with a blend and a
// re-levelling.

#include <benchmark/benchmark.h>

#include <cmath>

#include "rating/evaluate.hpp"
#include "replay/replay.hpp"
#include "replay/station_book.hpp"

using namespace station_book;

namespace {

constexpr std::int64_t kStepMs = 900'000;

RatingCurve three_controls(double bed_m) {
  RatingCurve made = curve({control(ControlKind::section, bed_m, 1.5, 24),
                            control(ControlKind::channel, bed_m - 0.4, 1.8, 9),
                            control(ControlKind::overbank, bed_m + 2.2, 1.7, 31)});
  made.takeover_level_m = bed_m + 1.1;
  made.gauged_low_m3s = 0.4;
  made.gauged_high_m3s = 40;
  made.lineage_high_m3s = 45;
  return made;
}

struct Decade {
  TemporaryPath path{"bench"};
  store::Book book;
  history::View view;
  std::vector<store::StageBlock> blocks;
  std::int64_t values = 0;

  Decade() : book(store::Book::create(path.text(), head("new"))) {
    add_ground(book, StationClock{}, {zero("2009-01-01T00:00Z", 99), zero("2014-05-05T10:07Z", 99.02)});
    add_curves(book, {three_controls(100), three_controls(100.3), three_controls(99.8)});
    add_edition(book, {period(1, "2010-01-01T00:00Z", "2013-02-03T04:05Z"),
                       period(2, "2013-02-03T04:05Z", "2017-01-01T00:00Z", Millis(86'400'000)),
                       period(3, "2017-01-01T00:00Z", "")});
    std::vector<store::StageReading> readings;
    for (std::int64_t ms = to_ms(at("2010-01-01T00:00Z")); ms < to_ms(at("2020-01-01T00:00Z"));
         ms += kStepMs) {
      const double days = double(ms) / 86'400'000;
      const double stage = 1.6 + std::sin(days / 9) + 0.6 * std::sin(days * 1.7) + 0.3 * std::sin(days * 7.1);
      readings.push_back({from_ms(ms), std::llround(1000 * stage), Quality::unchecked, 1});
    }
    values = static_cast<std::int64_t>(readings.size());
    add_stage(book, std::move(readings));
    view = history::view_of(book, kStation);
    for (const UtcMonth month : book.stage_months(kStation))
      blocks.push_back(book.stage_block(kStation, month));
  }
};

const Decade& decade() {
  static const Decade made;
  return made;
}

void per_value(benchmark::State& state) {
  state.SetItemsProcessed(state.iterations() * decade().values);
}

/// Curves alone: the stage is in memory already.
void flows_from_memory(benchmark::State& state) {
  const replay::Replayer replayer(decade().book, decade().view);
  for (auto _ : state) {
    for (const auto& block : decade().blocks) benchmark::DoNotOptimize(replayer.flows(block));
  }
  per_value(state);
}

/// Book, pieces of stage, curves.
void flows_from_the_book(benchmark::State& state) {
  const replay::Replayer replayer(decade().book, decade().view);
  for (auto _ : state) {
    replayer.run(at("2010-01-01T00:00Z"), at("2020-01-01T00:00Z"), [](const replay::FlowBlock& block) {
      benchmark::DoNotOptimize(block.discharge_m3s.data());
    });
  }
  per_value(state);
}

void day_means_from_the_book(benchmark::State& state) {
  const replay::Replayer replayer(decade().book, decade().view);
  const StationDay first = day_of(at("2010-01-01T00:00Z"), {});
  const StationDay end = day_of(at("2020-01-01T00:00Z"), {});
  for (auto _ : state) {
    replayer.day_means(first, end,
                       [](const replay::DayMean& mean) { benchmark::DoNotOptimize(mean.mean_m3s); });
  }
  per_value(state);
}

void replay_with_digests(benchmark::State& state) {
  for (auto _ : state) {
    benchmark::DoNotOptimize(
        replay::make_replay(decade().book, decade().view, at("2010-01-01T00:00Z"), at("2020-01-01T00:00Z")));
  }
  per_value(state);
}

/// The scalar definition by itself: what the rest adds to it.
void scalar_definition(benchmark::State& state) {
  decade();  // made before the clock starts
  const RatingCurve made = three_controls(100);
  double sum = 0;
  for (auto _ : state) {
    for (std::int64_t i = 0; i < decade().values; ++i) {
      sum += rating::evaluate(made, 100 + 3.5 * double(i) / double(decade().values)).discharge_m3s;
    }
  }
  benchmark::DoNotOptimize(sum);
  per_value(state);
}

BENCHMARK(scalar_definition)->Unit(benchmark::kMillisecond);
BENCHMARK(flows_from_memory)->Unit(benchmark::kMillisecond);
BENCHMARK(flows_from_the_book)->Unit(benchmark::kMillisecond);
BENCHMARK(day_means_from_the_book)->Unit(benchmark::kMillisecond);
BENCHMARK(replay_with_digests)->Unit(benchmark::kMillisecond);

}  // namespace
