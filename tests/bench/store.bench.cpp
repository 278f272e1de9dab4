// Ten years of 15-minute stage into a book and out of it again; a month of daily takes; a check of the whole.

#include <benchmark/benchmark.h>

#include <cmath>
#include <cstdlib>
#include <memory>

#include "replay/station_book.hpp"

using namespace station_book;

namespace {

constexpr std::int64_t kStepMs = 900'000;

store::StageSeries series_of(const std::string& from, const std::string& until) {
  store::StageSeries series{kStation, store::StageUnit::metre, 3, {}};
  std::int64_t line = 1;
  for (std::int64_t ms = to_ms(at(from)); ms < to_ms(at(until)); ms += kStepMs) {
    const double days = double(ms) / 86'400'000;
    const double stage = 1.6 + std::sin(days / 9) + 0.6 * std::sin(days * 1.7) + 0.3 * std::sin(days * 7.1);
    series.readings.push_back({from_ms(ms), std::llround(1000 * stage), Quality::good, ++line});
  }
  return series;
}

/// 350,640 readings.
const store::StageSeries& decade() {
  static const store::StageSeries made = series_of("2010-01-01T00:00Z", "2020-01-01T00:00Z");
  return made;
}

void take(store::Book& book, const store::StageSeries& series) {
  auto writer = book.begin(head("stage"));
  const auto file = writer.add_file("stage.csv", 1, std::string(64, '0'), "stage");
  if (!writer.overlaps(series).empty()) std::abort();
  (void)writer.add_stage(series, file);
  (void)writer.commit();
}

/// A book with the station and the decade in it.
struct Held {
  TemporaryPath path{"bench-store"};
  store::Book book;
  Held() : book(store::Book::create(path.text(), head("new"))) {
    add_ground(book, StationClock{}, {zero("2009-01-01T00:00Z", 99)});
    take(book, decade());
  }
};

Held& held() {
  static Held made;
  return made;
}

void take_a_decade(benchmark::State& state) {
  for (auto _ : state) {
    state.PauseTiming();
    auto path = std::make_unique<TemporaryPath>("bench-take");
    auto book = std::make_unique<store::Book>(store::Book::create(path->text(), head("new")));
    add_ground(*book, StationClock{}, {zero("2009-01-01T00:00Z", 99)});
    state.ResumeTiming();
    take(*book, decade());
    state.PauseTiming();
    book.reset();
    path.reset();
    state.ResumeTiming();
  }
  state.SetItemsProcessed(state.iterations() * std::int64_t(decade().readings.size()));
}
BENCHMARK(take_a_decade)->Unit(benchmark::kMillisecond);

void repeat_a_decade(benchmark::State& state) {
  for (auto _ : state) {
    auto writer = held().book.begin(head("stage"));
    if (!writer.overlaps(decade()).empty()) std::abort();
    benchmark::DoNotOptimize(writer.add_stage(decade(), 1));
  }
  state.SetItemsProcessed(state.iterations() * std::int64_t(decade().readings.size()));
}
BENCHMARK(repeat_a_decade)->Unit(benchmark::kMillisecond);

void read_a_decade(benchmark::State& state) {
  std::int64_t count = 0;
  for (auto _ : state) {
    for (const UtcMonth month : held().book.stage_months(kStation)) {
      count += std::int64_t(held().book.stage_block(kStation, month).time_ms.size());
    }
  }
  state.SetItemsProcessed(count);
}
BENCHMARK(read_a_decade)->Unit(benchmark::kMillisecond);

void read_a_month(benchmark::State& state) {
  const UtcMonth month = utc_month_of(at("2015-07-01T00:00Z"));
  for (auto _ : state) benchmark::DoNotOptimize(held().book.stage_block(kStation, month));
}
BENCHMARK(read_a_month)->Unit(benchmark::kMicrosecond);

/// A month that came in 31 daily takes.
void read_a_month_of_days(benchmark::State& state) {
  TemporaryPath path("bench-days");
  store::Book book = store::Book::create(path.text(), head("new"));
  add_ground(book, StationClock{}, {zero("2009-01-01T00:00Z", 99)});
  for (int day = 0; day < 31; ++day) {
    const auto from = at("2015-07-01T00:00Z") + Millis(86'400'000LL * day);
    take(book, series_of(format_time(from, {}), format_time(from + Millis(86'400'000), {})));
  }
  const UtcMonth month = utc_month_of(at("2015-07-01T00:00Z"));
  for (auto _ : state) benchmark::DoNotOptimize(book.stage_block(kStation, month));
}
BENCHMARK(read_a_month_of_days)->Unit(benchmark::kMicrosecond);

void origin_of_a_reading(benchmark::State& state) {
  for (auto _ : state) {
    benchmark::DoNotOptimize(held().book.reading_origin(kStation, at("2015-07-20T12:00Z")));
  }
}
BENCHMARK(origin_of_a_reading)->Unit(benchmark::kMicrosecond);

void verify_a_decade(benchmark::State& state) {
  for (auto _ : state) {
    if (!held().book.verify().empty()) std::abort();
  }
}
BENCHMARK(verify_a_decade)->Unit(benchmark::kMillisecond);

}  // namespace
