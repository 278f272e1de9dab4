// x^y with the same bits everywhere, one by one and by arrays, beside the library's pow; and what a fit of
// the area law costs.

#include <benchmark/benchmark.h>

#include <cmath>
#include <vector>

#include "hydraulics/area_law.hpp"
#include "hydraulics/power.hpp"
#include "hydraulics/uniform_flow.hpp"

using namespace scourbook::hydraulics;

namespace {

constexpr double kExponent = 2.2375;

/// Depths of 1 mm to 7 m: they fit the first cache.
const std::vector<double>& depths() {
  static const std::vector<double> made = [] {
    std::vector<double> d(2048);
    for (std::size_t i = 0; i < d.size(); ++i) d[i] = 0.001 + 0.0034 * static_cast<double>(i);
    return d;
  }();
  return made;
}

void per_value(benchmark::State& state) {
  state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(depths().size()));
}

void library_pow(benchmark::State& state) {
  std::vector<double> out(depths().size());
  for (auto _ : state) {
    for (std::size_t i = 0; i < out.size(); ++i) out[i] = std::pow(depths()[i], kExponent);
    benchmark::DoNotOptimize(out.data());
  }
  per_value(state);
}

void reproducible_one_by_one(benchmark::State& state) {
  std::vector<double> out(depths().size());
  for (auto _ : state) {
    for (std::size_t i = 0; i < out.size(); ++i) out[i] = reproducible_pow(depths()[i], kExponent);
    benchmark::DoNotOptimize(out.data());
  }
  per_value(state);
}

void reproducible_by_arrays(benchmark::State& state) {
  std::vector<double> out(depths().size());
  for (auto _ : state) {
    reproducible_pow(depths(), kExponent, out);
    benchmark::DoNotOptimize(out.data());
  }
  per_value(state);
}

/// A channel 40 m wide of 60 points.
SectionPart channel() {
  std::vector<Strip> strips;
  const auto bed = [](double x) {
    return 3 * std::pow(std::abs(x / 20 - 1), 2.2) + 0.05 * std::sin(2.3 * x);
  };
  for (int i = 0; i < 59; ++i) {
    const double left = 40.0 * i / 59, right = 40.0 * (i + 1) / 59;
    strips.push_back({left, bed(left), right, bed(right)});
  }
  return SectionPart(strips);
}

void area_law_free_offset(benchmark::State& state) {
  const SectionPart part = channel();
  for (auto _ : state) {
    benchmark::DoNotOptimize(fit_area_law_free_offset(part, {part.lowest_m(), part.lower_end_m()}));
  }
}

void flow_over_a_crest(benchmark::State& state) {
  const SectionPart part = channel();
  for (auto _ : state) benchmark::DoNotOptimize(crest_flow(part, 2.1, 1));
}

BENCHMARK(library_pow);
BENCHMARK(reproducible_one_by_one);
BENCHMARK(reproducible_by_arrays);
BENCHMARK(area_law_free_offset);
BENCHMARK(flow_over_a_crest);

}  // namespace
