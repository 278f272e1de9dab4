#include "rederivation/surveyed_control.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "hydraulics/area_law.hpp"

namespace scourbook::rederivation {
namespace {

using hydraulics::LevelRange;
using hydraulics::SectionPart;

constexpr double kSectionRange = 0.6;  // m above a crest
constexpr double kAboveBank = 1.0;     // m above the lower bank, for a channel beside an overbank

const ReachInput* channel_row(const Input& input) {
  for (const ReachInput& reach : input.reach) {
    if (reach.row.control == ControlKind::channel) return &reach;
  }
  return nullptr;
}

SectionPart part_of(const Input& input, const ReachRow& row) {
  return SectionPart(input.survey.points, row.cross_section, row.part);
}

/// The parent's overbank control of the same section and part.
const ControlCoefficients* parent_control(const Input& input, const ReachRow& row) {
  if (!input.parent) return nullptr;
  for (const ControlCoefficients& control : input.parent->curve.controls) {
    if (control.kind == row.control && control.cross_section == row.cross_section &&
        control.part == row.part) {
      return &control;
    }
  }
  return nullptr;
}

/// Level at which water gets into an overbank part: given, or the lower end of the main part beside it.
std::optional<double> spill_level(const Input& input, const ReachRow& row) {
  if (row.level_from_m) return row.level_from_m;
  const ReachInput* channel = channel_row(input);
  const std::string beside =
      channel != nullptr && channel->row.cross_section == row.cross_section ? channel->row.part : "main";
  const SectionPart main(input.survey.points, row.cross_section, beside);
  if (main.empty()) return {};
  return main.lower_end_m();
}

/// The highest top among the overbank controls; nothing where there is none.
std::optional<double> overbank_top(const Input& input) {
  std::optional<double> top;
  for (const ReachInput& reach : input.reach) {
    if (reach.row.control != ControlKind::overbank) continue;
    double own = 0;
    const SectionPart part = part_of(input, reach.row);
    const ControlCoefficients* before = parent_control(input, reach.row);
    if (reach.row.level_to_m) {
      own = *reach.row.level_to_m;
    } else if (!part.empty()) {
      own = part.highest_m();
    } else if (before != nullptr) {
      own = before->range_to_m;
    } else {
      continue;
    }
    top = top ? std::max(*top, own) : own;
  }
  return top;
}

double channel_top(const Input& input, const SectionPart& part) {
  const double bank = part.lower_end_m();
  const auto over = overbank_top(input);
  return over ? std::max(bank, std::min(bank + kAboveBank, *over)) : bank;
}

/// Of section and channel the offset stays with the lowest point, wherever the range begins; water gets into
/// an overbank part where its range begins.
LevelRange range_of(const Input& input, const ReachRow& row, const SectionPart& part) {
  const double lowest = part.lowest_m();
  LevelRange range{std::max(row.level_from_m.value_or(lowest), lowest), 0, lowest};
  switch (row.control) {
    case ControlKind::section:
      range.to_m = row.level_to_m.value_or(std::min(lowest + kSectionRange, part.lower_end_m()));
      break;
    case ControlKind::channel:
      range.to_m = row.level_to_m.value_or(channel_top(input, part));
      break;
    case ControlKind::overbank:
      range.from_m = std::max(lowest, spill_level(input, row).value_or(lowest));
      range.to_m = row.level_to_m.value_or(part.highest_m());
      range.foot_m = range.from_m;
      break;
  }
  return range;
}

std::string level(double m) {
  return fmt::format("{:.3f} m", m);
}

std::string place(const ReachRow& row) {
  return fmt::format("cross-section {}, part {}", row.cross_section, row.part);
}

void refuse(SurveyedControl& out, const Input& input, const ReachRow& row, hydraulics::LawStatus status,
            LevelRange range) {
  const std::string where =
      fmt::format("{} ({}) of survey {}", out.surveyed.name, place(row), input.survey.id);
  if (status == hydraulics::LawStatus::empty_range) {
    out.refusals.push_back(
        fmt::format("{} has no range of levels: it would go from {} to {}; give level_from_m and level_to_m "
                    "in the reach file",
                    where, level(range.from_m), level(range.to_m)));
  } else {
    out.refusals.push_back(
        fmt::format("{} is nowhere wet between {} and {}; look at the survey's elevations and at "
                    "level_from_m and level_to_m in the "
                    "reach file",
                    where, level(range.from_m), level(range.to_m)));
  }
}

/// "104.12 to 104.50 m": the stretches of levels that lie next to each other.
std::string stretches(const std::vector<double>& levels, LevelRange range) {
  const double step = (range.to_m - range.from_m) * 0.95 / 79;
  std::string text;
  for (std::size_t i = 0; i < levels.size();) {
    std::size_t last = i;
    while (last + 1 < levels.size() && levels[last + 1] - levels[last] < 1.5 * step) ++last;
    text += text.empty() ? "" : ", ";
    text += last == i ? fmt::format("{:.2f} m", levels[i])
                      : fmt::format("{:.2f} to {:.2f} m", levels[i], levels[last]);
    i = last + 1;
  }
  return text;
}

void remark(SurveyedControl& out, const hydraulics::AreaLaw& law, LevelRange range) {
  const std::string& name = out.surveyed.name;
  if (!law.missed_levels_m.empty()) {
    out.remarks.push_back(fmt::format("{}: the area law misses the section by over 10 % at {}", name,
                                      stretches(law.missed_levels_m, range)));
  }
  if (out.narrow_slot) {
    out.remarks.push_back(
        fmt::format("{}: narrow slot: offset uncertain (the lowest 5 % of its depth hold under 0.1 % of "
                    "the area)",
                    name));
  }
}

void fit_law(SurveyedControl& out, const Input& input, const ReachRow& row) {
  const LevelRange range = range_of(input, row, out.part);
  out.surveyed.range_from_m = range.from_m;
  out.surveyed.range_to_m = range.to_m;
  out.surveyed.lowest_point_m = row.control == ControlKind::overbank ? range.from_m : out.part.lowest_m();
  out.top_m = row.control == ControlKind::overbank ? out.part.highest_m() : out.part.lower_end_m();
  if (row.control == ControlKind::overbank) out.part = out.part.raised_to(range.from_m);
  const bool free_offset = row.control == ControlKind::channel && row.law != FlowLaw::critical;
  const auto fit = free_offset ? hydraulics::fit_area_law_free_offset(out.part, range)
                               : hydraulics::fit_area_law(out.part, range);
  if (fit.status != hydraulics::LawStatus::ok) return refuse(out, input, row, fit.status, range);
  out.surveyed.surveyed_h0_m = fit.law.h0_m;
  out.surveyed.surveyed_c = fit.law.c;
  out.surveyed.area_coefficient = fit.law.w;
  out.surveyed.section_coefficient = hydraulics::section_coefficient(out.part, fit.law, range, row.law);
  out.surveyed.law_misfit = fit.law.max_misfit;
  out.narrow_slot =
      fit.law.narrow_slot && row.control != ControlKind::section && row.law != FlowLaw::critical;
  remark(out, fit.law, range);
}

}  // namespace

std::string control_name(const ReachRow& row, bool several) {
  const std::string kind(word(row.control));
  return row.control == ControlKind::overbank && several ? kind + " " + row.part : kind;
}

std::vector<SurveyedControl> survey_controls(const Input& input) {
  const auto overbank = std::count_if(input.reach.begin(), input.reach.end(), [](const ReachInput& reach) {
    return reach.row.control == ControlKind::overbank;
  });
  std::vector<SurveyedControl> all;
  for (const ReachInput& reach : input.reach) {
    SurveyedControl out;
    const ReachRow& row = reach.row;
    out.surveyed.kind = row.control;
    out.surveyed.name = control_name(row, overbank > 1);
    out.surveyed.cross_section = row.cross_section;
    out.surveyed.part = row.part;
    out.surveyed.law = row.law;
    out.surveyed.velocity_exponent = hydraulics::velocity_exponent(row.law);
    out.surveyed.survey = input.survey.id;
    out.surveyed.survey_version = input.survey_version;
    out.part = part_of(input, row);
    out.found = !out.part.empty();
    if (out.found) fit_law(out, input, row);
    all.push_back(std::move(out));
  }
  return all;
}

double mean_depth_m(const ControlCoefficients& control) {
  const auto levels = hydraulics::law_levels({control.range_from_m, control.range_to_m});
  double sum = 0;
  for (const double level_m : levels) sum += std::log(level_m - control.surveyed_h0_m);
  return std::exp(sum / static_cast<double>(levels.size()));
}

}  // namespace scourbook::rederivation
