#include "weather.hpp"

#include <algorithm>
#include <cmath>

#include "arithmetic.hpp"

namespace scenario {
namespace {

constexpr std::uint64_t kWeatherSeed = 20151001;
constexpr double kCatchment_km2 = 410;
/// m3/s from 1 mm of run-off that leaves the catchment in one step.
constexpr double kFlowPerMm = kCatchment_km2 * 1000 / static_cast<double>(kStep);

/// Without rain; in it wells and ditches take twice as much from the river.
const Seconds kDryFrom = at("2018-05-12T00:00");
const Seconds kDryUntil = at("2018-09-06T00:00");

struct Storm {
  Seconds begin = 0;
  double hours = 0;
  double depth_mm = 0;
};

/// 0 at mid-winter (15 January), 1 at mid-summer.
double summer(Seconds time) {
  const double year = static_cast<double>(time - at("2015-01-15T00:00")) / (365.25 * kDay);
  return 0.5 - 0.5 * cosine_of_turn(year);
}

/// 1 in the dry summer, with a month to come and to go; 0 outside it.
double dryness(Seconds time) {
  const Seconds inside = std::min(time - kDryFrom, kDryUntil - time);
  return std::clamp(static_cast<double>(inside) / (30 * kDay), 0.0, 1.0);
}

/// Storms of ten years, by time, with those that the story needs.
std::vector<Storm> storms() {
  Random random(kWeatherSeed);
  std::vector<Storm> result;
  for (Seconds time = kBegin - 365 * kDay; time < kEnd;) {
    time += static_cast<Seconds>(random.waiting() * (2.6 + 1.2 * summer(time)) * kDay);
    const double hours = 2 + 9 * random.waiting() * (1 - 0.5 * summer(time));
    double depth = 6.5 * random.waiting();
    if (random.uniform() < 0.08) depth *= 2.4;
    depth = std::min(depth, 44.0);
    const bool dry = time > kDryFrom && time < kDryUntil;
    const bool made = time > at("2020-01-08T00:00") && time < at("2020-01-28T00:00");
    if (!dry && !made) result.push_back({time, hours, depth});
  }
  result.push_back({at("2020-01-10T06:00"), 10, 22});
  result.push_back({at("2020-01-13T15:00"), 14, 63});
  result.push_back({at("2022-11-16T02:00"), 16, 38});
  result.push_back({at("2022-11-20T20:00"), 12, 60});
  std::sort(result.begin(), result.end(), [](const Storm& a, const Storm& b) { return a.begin < b.begin; });
  return result;
}

std::vector<double> rain(Seconds begin, std::size_t steps) {
  std::vector<double> mm(steps);
  for (const Storm& storm : storms()) {
    const auto count = static_cast<std::int64_t>(storm.hours * 4) + 1;
    const std::int64_t first = (storm.begin - begin) / kStep;
    for (std::int64_t i = 0; i < count; ++i) {
      const std::int64_t step = first + i;
      if (step >= 0 && step < static_cast<std::int64_t>(steps)) {
        mm[static_cast<std::size_t>(step)] += storm.depth_mm / static_cast<double>(count);
      }
    }
  }
  return mm;
}

/// A store that empties by the same share every step.
struct Store {
  double hours = 1;
  double mm = 0;
  double step(double in_mm) {
    mm += in_mm;
    const double out = mm * 0.25 / hours;
    mm -= out;
    return out;
  }
};

}  // namespace

std::vector<double> flow_at_millmark() {
  // A year to forget the start.
  const Seconds begin = kBegin - 365 * kDay;
  const auto steps = static_cast<std::size_t>((kEnd - begin) / kStep);
  const auto mm = rain(begin, steps);
  Store quick_a{6}, quick_b{6}, slow{110}, deep{1900, 25};
  double soil_mm = 60;  // of 110 that it can hold
  std::vector<double> flow;
  for (std::size_t i = 0; i < steps; ++i) {
    const Seconds time = begin + static_cast<Seconds>(i) * kStep;
    const double wetness = soil_mm / 110;
    const double runs_off = mm[i] * 0.62 * wetness * wetness;
    const double evaporated = (0.25 + 3.0 * summer(time)) / 96 * wetness;
    const double drained = 2.4 / 96 * wetness * wetness * wetness;
    soil_mm = std::clamp(soil_mm + mm[i] - runs_off - evaporated - drained, 0.0, 110.0);
    const double quick = quick_b.step(quick_a.step(0.6 * runs_off));
    const double slow_out = slow.step(0.4 * runs_off + 0.35 * drained);
    const double deep_out = deep.step(0.65 * drained);
    // Trees and wells along the river take water in summer; in a dry one all of it.
    const double taken = 0.42 * power(summer(time), 2) * (1 + 1.4 * dryness(time));
    if (time >= kBegin) flow.push_back(std::max(0.0, kFlowPerMm * (quick + slow_out + deep_out) - taken));
  }
  return flow;
}

std::vector<double> flow_at_lowbridge(const std::vector<double>& millmark) {
  std::vector<double> flow(millmark.size());
  double joined = millmark.front();
  for (std::size_t i = 0; i < flow.size(); ++i) {
    const double above = millmark[i < 6 ? 0 : i - 6];
    joined += (above - joined) / 12;  // the flood wave flattens over three hours
    flow[i] = 0.55 + 1.18 * joined + 0.1 * summer(time_of(i));
  }
  return flow;
}

}  // namespace scenario
