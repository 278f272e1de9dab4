#include "hydraulics/area_law.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "hydraulics/power.hpp"

namespace scourbook::hydraulics {
namespace {

constexpr int kLevels = 80;
constexpr double kLowestShare = 0.05;
constexpr double kMissed = 0.10;
constexpr double kSlotArea = 0.001;
constexpr double kOffsetFrom = -0.05, kOffsetTo = 0.045;

/// The wet levels of the fit: height above the foot as a share of the range's depth, and ln of the area. In
/// shares the arithmetic is the same whatever the unit of length.
struct Sample {
  double share, ln_area;
};

std::vector<Sample> wet_samples(const SectionPart& part, LevelRange range) {
  std::vector<Sample> samples;
  const double depth = range.to_m - range.from_m;
  for (const double level : law_levels(range)) {
    const double area = part.at(level).area_m2;
    if (area > 0) samples.push_back({(level - range.foot()) / depth, reproducible_log(area)});
  }
  return samples;
}

/// ln area = intercept + c ln(share - x)
struct Line {
  double intercept = 0, c = 0;
  double sum_of_squares = 0;
  double slope = 0;  ///< d(sum_of_squares)/dx
};

Line fit_line(const std::vector<Sample>& samples, double x) {
  const double n = static_cast<double>(samples.size());
  std::vector<double> ln_share;
  ln_share.reserve(samples.size());
  double mean_x = 0, mean_y = 0;
  for (const Sample& s : samples) {
    ln_share.push_back(reproducible_log(s.share - x));
    mean_x += ln_share.back() / n;
    mean_y += s.ln_area / n;
  }
  double xx = 0, xy = 0;
  for (std::size_t i = 0; i < samples.size(); ++i) {
    xx += (ln_share[i] - mean_x) * (ln_share[i] - mean_x);
    xy += (ln_share[i] - mean_x) * (samples[i].ln_area - mean_y);
  }
  Line line;
  line.c = xy / xx;
  line.intercept = mean_y - line.c * mean_x;
  for (std::size_t i = 0; i < samples.size(); ++i) {
    const double residual = (samples[i].ln_area - mean_y) - line.c * (ln_share[i] - mean_x);
    line.sum_of_squares += residual * residual;
    // The intercept and c are at their own minimum, so that only ln(share - x) itself moves.
    line.slope += 2 * residual * line.c / (samples[i].share - x);
  }
  return line;
}

/// The x in [kOffsetFrom, kOffsetTo] with the smallest sum of squares: the best of a grid, then the zero of
/// the derivative beside it by bisection, which runs to an end of the interval where the sum falls towards
/// it.
double best_offset(const std::vector<Sample>& samples) {
  constexpr int kSteps = 19;
  const auto grid = [](int i) { return kOffsetFrom + (kOffsetTo - kOffsetFrom) * i / kSteps; };
  int best = 0;
  double least = std::numeric_limits<double>::infinity();
  for (int i = 0; i <= kSteps; ++i) {
    const double sum = fit_line(samples, grid(i)).sum_of_squares;
    if (sum < least) {
      least = sum;
      best = i;
    }
  }
  double low = grid(std::max(best - 1, 0)), high = grid(std::min(best + 1, kSteps));
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (fit_line(samples, middle).slope > 0 ? high : low) = middle;
  }
  return 0.5 * (low + high);
}

void judge(AreaLaw& law, const SectionPart& part, LevelRange range) {
  for (const double level : law_levels(range)) {
    const double area = part.at(level).area_m2;
    const double misfit =
        area > 0 ? std::abs(law.w * reproducible_pow(level - law.h0_m, law.c) / area - 1) : 0;
    law.max_misfit = std::max(law.max_misfit, misfit);
    if (!(area > 0) || misfit > kMissed) law.missed_levels_m.push_back(level);
  }
  const double low = range.from_m + kLowestShare * (range.to_m - range.from_m);
  law.narrow_slot = part.at(low).area_m2 < kSlotArea * part.at(range.to_m).area_m2;
}

AreaLawFit fit(const SectionPart& part, LevelRange range, bool free_offset) {
  assert(!(range.foot() > range.from_m));
  AreaLawFit result;
  const double depth = range.to_m - range.from_m;
  if (!(depth > 0) || !std::isfinite(depth)) {
    result.status = LawStatus::empty_range;
    return result;
  }
  const std::vector<Sample> samples = wet_samples(part, range);
  if (samples.size() < 2) {
    result.status = LawStatus::nowhere_wet;
    return result;
  }
  const double x = free_offset ? best_offset(samples) : 0;
  const Line line = fit_line(samples, x);
  result.status = LawStatus::ok;
  result.law.h0_m = range.foot() + x * depth;
  result.law.c = line.c;
  result.law.w = reproducible_exp(line.intercept - line.c * reproducible_log(depth));
  judge(result.law, part, range);
  return result;
}

}  // namespace

std::vector<double> law_levels(LevelRange range) {
  std::vector<double> levels;
  levels.reserve(kLevels);
  const double depth = range.to_m - range.from_m;
  for (int i = 0; i < kLevels; ++i) {
    levels.push_back(range.from_m + depth * (kLowestShare + (1 - kLowestShare) * i / (kLevels - 1)));
  }
  levels.back() = range.to_m;
  return levels;
}

AreaLawFit fit_area_law(const SectionPart& part, LevelRange range) {
  return fit(part, range, false);
}

AreaLawFit fit_area_law_free_offset(const SectionPart& part, LevelRange range) {
  return fit(part, range, true);
}

double velocity_exponent(FlowLaw law) {
  return law == FlowLaw::manning ? 2.0 / 3.0 : 0.5;
}

double velocity_scale(const ReachRow& row) {
  switch (row.law) {
    case FlowLaw::manning:
      assert(row.slope && row.roughness_n);
      return std::sqrt(*row.slope) / (*row.roughness_n * row.meander_factor);
    case FlowLaw::chezy:
      assert(row.slope && row.chezy_c);
      return *row.chezy_c * std::sqrt(*row.slope) / row.meander_factor;
    case FlowLaw::critical:
      break;
  }
  assert(row.coefficient);
  return *row.coefficient;
}

double section_coefficient(const SectionPart& part, const AreaLaw& law, LevelRange range, FlowLaw flow_law) {
  const double b = velocity_exponent(flow_law), c = law.c;
  if (flow_law == FlowLaw::critical) {
    return law.w * std::sqrt(kGravity / c) * reproducible_pow(2 * c / (2 * c + 1), c + 0.5);
  }
  double sum = 0;
  int wet = 0;
  for (const double level : law_levels(range)) {
    const SectionElements e = part.at(level);
    if (!(e.area_m2 > 0)) continue;
    sum += reproducible_log(e.area_m2) + b * reproducible_log(e.hydraulic_radius_m()) -
           (b + c) * reproducible_log(level - law.h0_m);
    ++wet;
  }
  assert(wet > 0);
  return reproducible_exp(sum / wet);
}

}  // namespace scourbook::hydraulics
