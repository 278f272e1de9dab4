// What becomes of a decade of 15-minute flows: series as text, a publication, traces, a check of it all.

#include <benchmark/benchmark.h>

#include <cmath>
#include <sstream>

#include "publish/check.hpp"
#include "publish/publication.hpp"
#include "publish/series.hpp"
#include "publish/trace.hpp"
#include "replay/replay.hpp"
#include "replay/station_book.hpp"

using namespace station_book;

namespace {

struct PublishedDecade {
  TemporaryPath path{"bench-publish"};
  store::Book book;
  store::ReplayRecord replay;
  std::int64_t values = 0;

  PublishedDecade() : book(store::Book::create(path.text(), head("new"))) {
    add_ground(book, StationClock{}, {zero("2009-01-01T00:00Z", 99)});
    auto made =
        curve({control(ControlKind::section, 100, 1.5, 24), control(ControlKind::channel, 99.6, 1.8, 9),
               control(ControlKind::overbank, 102.2, 1.7, 31)});
    made.takeover_level_m = 101.1;
    add_curves(book, {made});
    add_edition(book, {period(1, "2010-01-01T00:00Z", "")});
    std::vector<store::StageReading> readings;
    for (std::int64_t ms = to_ms(at("2010-01-01T00:00Z")); ms < to_ms(at("2020-01-01T00:00Z"));
         ms += 900'000) {
      const double days = double(ms) / 86'400'000;
      const double stage = 1.6 + std::sin(days / 9) + 0.6 * std::sin(days * 1.7) + 0.3 * std::sin(days * 7.1);
      readings.push_back({from_ms(ms), std::llround(1000 * stage), Quality::unchecked, 1});
    }
    values = static_cast<std::int64_t>(readings.size());
    add_stage(book, std::move(readings));
    auto writer = book.begin(head("replay"));
    replay = writer.add_replay(replay::make_replay(book, history::view_of(book, kStation),
                                                   at("2010-01-01T00:00Z"), at("2020-01-01T00:00Z")));
    writer.commit();
    auto publication = publish::make_publication(book, replay);
    auto second = book.begin(head("publish"));
    (void)second.add_publication(std::move(publication));
    second.commit();
  }
};

const PublishedDecade& decade() {
  static const PublishedDecade made;
  return made;
}

void series(benchmark::State& state, publish::MeanOver mean, bool published) {
  publish::SeriesRequest request;
  request.station = kStation;
  request.from = at("2010-01-01T00:00Z");
  request.until = at("2020-01-01T00:00Z");
  request.mean = mean;
  request.published = published;
  const auto& made = decade();
  for (auto _ : state) {
    std::ostringstream out;
    publish::write_csv(made.book, request, UtcOffset{}, out);
    benchmark::DoNotOptimize(out.str().size());
  }
  state.counters["values"] = double(made.values);
}

void publication(benchmark::State& state) {
  const auto& made = decade();
  for (auto _ : state)
    benchmark::DoNotOptimize(publish::make_publication(made.book, made.replay).days.size());
}

void check(benchmark::State& state) {
  const auto& made = decade();
  for (auto _ : state) benchmark::DoNotOptimize(publish::check(made.book).published_values);
}

void trace_value(benchmark::State& state) {
  const publish::TraceRequest request{kStation, at("2015-06-01T12:00Z"), {}, {}, {}};
  for (auto _ : state) benchmark::DoNotOptimize(publish::trace_value(decade().book, request).agrees());
}

void trace_day(benchmark::State& state) {
  const publish::TraceRequest request{kStation, at("2015-06-01T12:00Z"), {}, {}, {}};
  for (auto _ : state) benchmark::DoNotOptimize(publish::trace_day(decade().book, request).agrees());
}

}  // namespace

BENCHMARK_CAPTURE(series, readings, publish::MeanOver::none, false)->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(series, days, publish::MeanOver::day, false)->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(series, published_readings, publish::MeanOver::none, true)->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(series, published_days, publish::MeanOver::day, true)->Unit(benchmark::kMillisecond);
BENCHMARK(publication)->Unit(benchmark::kMillisecond);
BENCHMARK(check)->Unit(benchmark::kMillisecond);
BENCHMARK(trace_value)->Unit(benchmark::kMillisecond);
BENCHMARK(trace_day)->Unit(benchmark::kMillisecond);
