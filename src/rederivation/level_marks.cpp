#include "rederivation/level_marks.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <utility>
#include <vector>

#include "rederivation/inherited_control.hpp"

namespace scourbook::rederivation {
namespace {

using MarkKey = std::pair<std::string, std::string>;

std::map<MarkKey, double> marks_of(const Survey& survey) {
  std::map<MarkKey, double> marks;
  for (const SurveyPoint& point : survey.points) {
    if (!point.mark.empty()) marks.emplace(MarkKey{point.cross_section, point.mark}, point.elevation_m);
  }
  return marks;
}

double median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  const std::size_t half = values.size() / 2;
  return values.size() % 2 == 1 ? values[half] : (values[half - 1] + values[half]) / 2;
}

}  // namespace

std::optional<MarkShift> mark_shift(const Survey& before, const Survey& now) {
  if (before.id == now.id) return {};
  const auto old_marks = marks_of(before);
  std::vector<std::pair<double, std::string>> differences;
  for (const auto& [key, elevation] : marks_of(now)) {
    const auto old = old_marks.find(key);
    if (old != old_marks.end()) differences.emplace_back(elevation - old->second, key.second);
  }
  if (differences.empty()) return {};
  std::vector<double> values;
  for (const auto& difference : differences) values.push_back(difference.first);
  MarkShift result;
  result.count = static_cast<int>(values.size());
  result.shift_m = median(values);
  double squares = 0;
  for (const auto& [value, name] : differences) {
    const double gap = std::abs(value - result.shift_m);
    squares += gap * gap;
    if (gap > result.largest_gap_m) {
      result.largest_gap_m = gap;
      result.largest_at = name;
    }
  }
  const double spread = result.count > 1 ? std::sqrt(squares / (result.count - 1)) : 0;
  result.sd_m = std::max(prior_sd::kLeastMarks, spread / std::sqrt(result.count));
  return result;
}

}  // namespace scourbook::rederivation
