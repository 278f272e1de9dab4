#include "stations.hpp"

#include <algorithm>
#include <cassert>

namespace scenario {
namespace {

constexpr Resistance kMillmarkResistance{0.00115, 0.0335, 0.058};
constexpr Resistance kLowbridgeResistance{0.00085, 0.0285, 0.06};
constexpr double kCrestCoefficient = 0.93;
/// Time that a flood takes to move the bed, around its peak.
constexpr Seconds kBedMoves = 6 * kHour;

/// Rock bar, 26 m wide between rock walls, lowest at 101.20 m.
const std::vector<BedPoint> kCrest = {{0, 105.60},    {1.2, 103.80},  {3.0, 102.20},  {4.6, 101.78},
                                      {7.0, 101.47},  {11.0, 101.30}, {15.0, 101.20}, {19.0, 101.33},
                                      {23.0, 101.52}, {25.5, 101.88}, {27.5, 102.60}, {29.0, 104.00},
                                      {30.5, 105.60}};
/// Rock on the left, a pile wall at 29 m on the right, then 58 m of meadow and the valley side.
const std::vector<BedPoint> kMillmarkChannel = {
    {0, 106.40},          {1.0, 105.20},        {3.2, 103.30},        {5.4, 101.95},
    {7.0, 101.25},        {10.5, 100.98},       {14.5, 100.88},       {18.5, 100.96},
    {22.0, 101.22},       {24.2, 101.85},       {26.6, 102.90},       {29.0, 103.62, true},
    {38.0, 103.70, true}, {52.0, 103.84, true}, {70.0, 103.98, true}, {84.0, 104.20, true},
    {89.0, 105.40, true}, {92.0, 106.40}};
const std::vector<BedPoint> kLowbridgeChannel = {
    {0, 48.20},    {2.5, 46.60},  {6.0, 44.30},  {9.0, 42.60},  {12.0, 41.75}, {18.0, 41.32}, {24.0, 41.20},
    {31.0, 41.38}, {36.0, 41.80}, {39.5, 42.80}, {43.0, 44.60}, {46.5, 46.80}, {49.0, 48.20}};

/// Peak of the flood within four days of `near`.
Seconds peak_near(const std::vector<double>& flow, Seconds near) {
  const auto first = flow.begin() + static_cast<std::ptrdiff_t>(step_of(near - 4 * kDay));
  const auto last = flow.begin() + static_cast<std::ptrdiff_t>(step_of(near + 4 * kDay));
  return time_of(static_cast<std::size_t>(std::max_element(first, last) - flow.begin()));
}

/// Levels from flows: by the curve of the time, in a change passing from one to the next; a pool that no
/// longer runs over falls by 1.5 mm a day, 40 mm at most.
std::vector<double> levels(const std::vector<double>& flow, const std::vector<State>& states) {
  std::vector<double> level(flow.size());
  double below_m = 0;
  std::size_t now = 0;
  for (std::size_t i = 0; i < flow.size(); ++i) {
    const Seconds time = time_of(i);
    if (now + 1 < states.size() && time >= states[now + 1].from - kBedMoves / 2) ++now;
    double z = states[now].curve.level(flow[i]);
    const Seconds since = time - (states[now].from - kBedMoves / 2);
    if (now > 0 && since < kBedMoves) {
      const double x = static_cast<double>(since) / static_cast<double>(kBedMoves);
      z = (1 - x) * states[now - 1].curve.level(flow[i]) + x * z;
    }
    below_m = flow[i] > 0 ? 0 : std::min(below_m + 0.0015 / 96, 0.04);
    level[i] = z - below_m;
  }
  return level;
}

}  // namespace

const State& Site::state_at(Seconds time) const {
  std::size_t now = 0;
  while (now + 1 < states.size() && time >= states[now + 1].from) ++now;
  return states[now];
}

double Site::zero_at(Seconds time) const {
  double zero = zeros.front().zero_m;
  for (const GaugeZero& row : zeros) {
    if (time >= row.from) zero = row.zero_m;
  }
  return zero;
}

Site millmark() {
  Site site{
      "TAR-1", "Millmark", {}, {{kBegin, 100.652}, {at("2018-05-15T11:00"), 100.614}}, flow_at_millmark(),
      {}};
  const Bed crest = make_bed(kCrest, 0.02, 101.8, 11);
  const Bed channel = make_bed(kMillmarkChannel, 0.035, 102.0, 12);
  const auto add = [&](Seconds from, const char* what, const Bed& c, const Bed& ch, double n_factor) {
    Resistance resistance = kMillmarkResistance;
    resistance.main_n *= n_factor;
    site.states.push_back({from, what, c, ch, TrueCurve(&c, kCrestCoefficient, ch, resistance, 106.3)});
  };
  add(kBegin, "first bed", crest, channel, 1);
  // Gravel fills the pool and lies on the bar; the finer bed is a little smoother, the scoured one a little
  // rougher.
  const Bed filled_crest = changed(crest, {0.18, 0.3, 101.75, 0.015, 21});
  const Bed filled = changed(channel, {0.29, -0.4, 102.1, 0.03, 22});
  add(peak_near(site.flow_m3s, at("2020-01-14T06:00")), "fill", filled_crest, filled, 0.99);
  const Bed scoured_crest = changed(filled_crest, {-0.26, 0.2, 101.8, 0.015, 23});
  const Bed scoured = changed(filled, {-0.46, 0.3, 102.3, 0.03, 24});
  add(peak_near(site.flow_m3s, at("2022-11-21T10:00")), "scour", scoured_crest, scoured, 1.01);
  site.level_m = levels(site.flow_m3s, site.states);
  return site;
}

Site lowbridge(const Site& millmark) {
  Site site{"TAR-2", "Lowbridge", {}, {{kBegin, 41.05}}, flow_at_lowbridge(millmark.flow_m3s), {}};
  const Bed channel = make_bed(kLowbridgeChannel, 0.03, 42.2, 31);
  const auto add = [&](Seconds from, const char* what, const Bed& bed) {
    site.states.push_back({from, what, {}, bed, TrueCurve(nullptr, 0, bed, kLowbridgeResistance, 48.1)});
  };
  add(kBegin, "first bed", channel);
  add(peak_near(site.flow_m3s, at("2020-01-14T08:00")), "scour",
      changed(channel, {-0.30, -0.5, 42.4, 0.03, 32}));
  site.level_m = levels(site.flow_m3s, site.states);
  return site;
}

}  // namespace scenario
