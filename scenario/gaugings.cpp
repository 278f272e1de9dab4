// Gaugings: somebody goes out on a working day when the river stands near a wanted flow, and measures with an
// error that the stated uncertainty tells honestly.

#include <algorithm>
#include <cassert>
#include <cmath>

#include "arithmetic.hpp"
#include "field.hpp"

namespace scenario {
namespace {

struct Visit {
  std::size_t step = 0;   ///< start
  std::size_t steps = 3;  ///< duration
};

constexpr Seconds kApart = 12 * kDay;  ///< between two visits

/// A day step between 9 and 15 o'clock on a Monday to Friday.
bool working_time(std::size_t step) {
  const Seconds local = time_of(step) + kHour;
  const Seconds of_day = local % kDay;
  const std::int64_t weekday = (local / kDay + 4) % 7;  // 1970-01-01 was a Thursday; Sunday = 0
  return of_day >= 9 * kHour && of_day <= 15 * kHour && weekday != 0 && weekday != 6;
}

/// A random working time in [from, until) within 4 % of the wanted flow, else the nearest, away from other
/// visits.
Visit choose(const Site& site, double wanted, Seconds from, Seconds until, const std::vector<Visit>& others,
             Random& random) {
  std::vector<std::size_t> near;
  std::size_t best = 0;
  double least = 1e9;
  for (std::size_t i = step_of(from); i < step_of(until); ++i) {
    if (site.flow_m3s[i] <= 0 || !working_time(i)) continue;
    const bool taken = std::any_of(others.begin(), others.end(), [&](const Visit& v) {
      return std::abs(time_of(v.step) - time_of(i)) < kApart;
    });
    if (taken) continue;
    const double off = std::abs(logarithm(site.flow_m3s[i] / wanted));
    if (off < 0.04) near.push_back(i);
    if (off < least) {
      least = off;
      best = i;
    }
  }
  if (!near.empty())
    best = near[static_cast<std::size_t>(random.uniform() * static_cast<double>(near.size()))];
  return {best, 2 + static_cast<std::size_t>(random.uniform() * 3)};
}

/// Three significant digits, written without more: 0.0873, 1.32, 41.0, 124.
std::string three_digits(double x) {
  const double value = significant(x, 3);
  const int decimals = value >= 100 ? 0 : value >= 10 ? 1 : value >= 1 ? 2 : value >= 0.1 ? 3 : 4;
  return fixed(value, decimals);
}

/// One line of the file. The staff is read by eye, to a few mm; the sensor plays no part.
std::string measured(const Site& site, const std::string& id, const Visit& visit, bool says_uncertainty,
                     Random& random) {
  const std::size_t end = visit.step + visit.steps;
  const std::size_t middle = visit.step + visit.steps / 2;
  const double flow = (site.flow_m3s[visit.step] + site.flow_m3s[middle] + site.flow_m3s[end]) / 3;
  const double uncertainty_pct = flow < 1 ? 8 : flow < 50 ? 5 : 7;
  const double found = flow * exponential((says_uncertainty ? uncertainty_pct : 8) / 200 * random.normal());
  const Seconds time = time_of(visit.step);
  const auto staff = [&](std::size_t step) {
    return rounded(site.level_m[step] - site.zero_at(time) + 0.003 * random.normal(), 3);
  };
  const bool moves = std::abs(site.level_m[end] - site.level_m[visit.step]) > 0.01;
  const double stage = moves ? staff(visit.step) : staff(middle);
  const WetSection wet = wet_section(site.state_at(time).channel, site.level_m[middle]);
  const double area = wet.area_m2 * (1 + 0.015 * random.normal());
  const double width = rounded(wet.top_width_m * (1 + 0.01 * random.normal()), 1);
  return site.id + "," + id + "," + local_text(time, kHour) + "," + local_text(time_of(end), kHour) + "," +
         fixed(stage, 3) + "," + three_digits(found) + "," +
         (says_uncertainty ? fixed(uncertainty_pct, 0) : "") + ",0.005," +
         (moves ? fixed(staff(end), 3) : "") + "," + (flow > 9 ? "acoustic profiler" : "wading rod") + "," +
         three_digits(area) + "," + fixed(width, 1) + "," + three_digits(found / area) + ",\n";
}

struct Campaign {
  Seconds from, until;
  std::vector<double> wanted_m3s;  ///< largest first: floods leave the least choice
};

/// Lines of all campaigns of a station, by time; `first` is the number of its first gauging.
std::string gaugings(const Site& site, const std::string& prefix, const std::vector<Campaign>& campaigns,
                     Seconds zero_flow, std::uint64_t seed) {
  Random random(seed);
  std::vector<Visit> visits;
  for (const Campaign& campaign : campaigns) {
    for (const double wanted : campaign.wanted_m3s) {
      visits.push_back(choose(site, wanted, campaign.from, campaign.until, visits, random));
    }
  }
  if (zero_flow != 0) visits.push_back({step_of(zero_flow), 1});
  std::sort(visits.begin(), visits.end(), [](const Visit& a, const Visit& b) { return a.step < b.step; });
  std::string text;
  for (std::size_t i = 0; i < visits.size(); ++i) {
    const std::string id = prefix + (i < 9 ? "0" : "") + std::to_string(i + 1);
    if (zero_flow != 0 && visits[i].step == step_of(zero_flow)) {
      assert(site.flow_m3s[visits[i].step] == 0);
      const double stage = rounded(site.level_m[visits[i].step] - site.zero_at(zero_flow), 3);
      text += site.id + "," + id + "," + local_text(zero_flow, kHour) + ",," + fixed(stage, 3) +
              ",0,,0.005,,observed,,,,no water over the bar; seen by technician B\n";
    } else {
      text += measured(site, id, visits[i], i % 8 != 5, random);
    }
  }
  return text;
}

}  // namespace

TextFile gauging_file(const Site& millmark, const Site& lowbridge) {
  const Seconds fill = millmark.states[1].from, scour = millmark.states[2].from;
  std::string text =
      "station,gauging,start,end,stage_m,discharge_m3s,uncertainty_pct,stage_uncertainty_m,stage_end_m,"
      "method,"
      "area_m2,width_m,velocity_ms,remark\n";
  const std::vector<Campaign> at_millmark = {
      {kBegin + 10 * kDay, fill - kDay, {80, 60,  45,  34, 26,  20,  16,  13,  10.5, 8.6, 7.2, 6,
                                         5,  4.2, 3.6, 3,  2.6, 2.2, 1.8, 1.5, 1.2,  0.9, 0.6, 0.4}},
      {fill + 20 * kDay, scour - kDay, {38, 11, 3.4, 1.6}},
      {scour + 20 * kDay, kEnd - 30 * kDay, {27, 6.5, 1.3}}};
  const std::vector<Campaign> at_lowbridge = {
      {kBegin + 10 * kDay,
       lowbridge.states[1].from - kDay,
       {70, 48, 32, 22, 15, 11, 8.5, 6.8, 5.4, 4.2, 3.4, 2.7, 2.1, 1.5}}};
  text += gaugings(millmark, "M", at_millmark, at("2018-08-02T11:00"), 201);
  text += gaugings(lowbridge, "L", at_lowbridge, 0, 202);
  return {"gaugings.csv", text};
}

}  // namespace scenario
