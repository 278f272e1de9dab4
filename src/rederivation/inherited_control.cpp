#include "rederivation/inherited_control.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <iterator>

#include "hydraulics/area_law.hpp"

namespace scourbook::rederivation {
namespace {

bool is_crest(const ReachRow& row) {
  return row.law == FlowLaw::critical;
}

double scale_sd_of(const ReachRow& row) {
  if (row.scale_sd_pct) return *row.scale_sd_pct / 100;
  return is_crest(row) ? prior_sd::kLnV1Crest : prior_sd::kLnV1;
}

bool same_place(const ReachRow& a, const ReachRow& b) {
  return a.control == b.control && a.law == b.law && a.cross_section == b.cross_section && a.part == b.part;
}

/// The parent's control that this row goes on with; -1 where there is none.
int in_parent(const Input& input, const ReachRow& row) {
  if (!input.parent) return -1;
  const auto& rows = input.parent->reach;
  const auto at =
      std::find_if(rows.begin(), rows.end(), [&](const ReachInput& r) { return same_place(r.row, row); });
  if (at == rows.end()) return -1;
  const auto index = static_cast<std::size_t>(std::distance(rows.begin(), at));
  return index < input.parent->curve.controls.size() ? static_cast<int>(index) : -1;
}

void compare(std::string& differences, const char* what, const std::optional<double>& before,
             const std::optional<double>& now) {
  if (before == now) return;
  const auto text = [](const std::optional<double>& value) {
    return value ? fmt::format("{:g}", *value) : std::string("blank");
  };
  differences +=
      fmt::format("{}{} {} (was {})", differences.empty() ? "" : ", ", what, text(now), text(before));
}

/// What the row says of the scale differently from the parent's; empty where it says the same.
std::string scale_differences(const ReachRow& before, const ReachRow& now) {
  std::string differences;
  compare(differences, "slope", before.slope, now.slope);
  compare(differences, "roughness_n", before.roughness_n, now.roughness_n);
  compare(differences, "chezy_c", before.chezy_c, now.chezy_c);
  compare(differences, "coefficient", before.coefficient, now.coefficient);
  compare(differences, "meander_factor", before.meander_factor, now.meander_factor);
  return differences;
}

void start_anew(ControlStart& start, const ReachRow& row) {
  ControlCoefficients& c = start.control;
  c.velocity_scale = hydraulics::velocity_scale(row);
  c.reference_depth_m = mean_depth_m(c);
  c.scale_fate = Fate::fresh;
  c.allowance_fate = Fate::fresh;
  c.calibrated_in = 0;
  start.scale_sd = scale_sd_of(row);
}

class Inheritor {
 public:
  explicit Inheritor(const Input& input) : input_(input) {}

  Inheritance run(const std::vector<SurveyedControl>& surveyed) {
    for (std::size_t i = 0; i < surveyed.size(); ++i) add(input_.reach[i].row, surveyed[i]);
    refuse_missing();
    refuse_unknown_carry(surveyed);
    name_dropped();
    return std::move(result_);
  }

 private:
  void add(const ReachRow& row, const SurveyedControl& surveyed) {
    ControlStart start;
    start.control = surveyed.surveyed;
    start.narrow_slot = surveyed.narrow_slot;
    start.in_parent = in_parent(input_, row);
    for (const auto& refusal : surveyed.refusals) result_.refusals.push_back(refusal);
    for (const auto& remark : surveyed.remarks) result_.remarks.push_back(remark);
    if (!surveyed.found && !carry(start)) return;
    if (!surveyed.refusals.empty()) return;
    if (start.in_parent >= 0) {
      take_over(start, row);
    } else {
      start_anew(start, row);
      if (input_.parent) {
        const auto& before = input_.parent->curve.controls;
        const bool there = std::any_of(before.begin(), before.end(), [&](const ControlCoefficients& c) {
          return c.name == start.control.name;
        });
        result_.remarks.push_back(fmt::format("{}: {}; it starts from its reach row", start.control.name,
                                              there ? "flow law, cross-section or part is not the parent's"
                                                    : "the parent has no such control"));
      }
    }
    result_.controls.push_back(std::move(start));
  }

  /// Keeps what the parent's survey showed of a control that the new survey lacks.
  bool carry(ControlStart& start) {
    const auto& names = input_.options.carry;
    const bool named = std::find(names.begin(), names.end(), start.control.name) != names.end();
    if (start.in_parent < 0) {
      nowhere_.push_back(fmt::format("{} (cross-section {}, part {})", start.control.name,
                                     start.control.cross_section, start.control.part));
      return false;
    }
    const ControlCoefficients& before = parent_control(start);
    if (!named) {
      missing_.push_back(start.control.name);
      return false;
    }
    const std::string name = start.control.name;
    start.control = before;
    start.control.name = name;
    start.control.trim_h0_m = 0;
    start.control.trim_c = 0;
    start.control.survey_fate = Fate::carried;
    result_.remarks.push_back(
        fmt::format("{} is carried from survey {}: it was not surveyed again", name, before.survey));
    return true;
  }

  void take_over(ControlStart& start, const ReachRow& row) {
    const ControlCoefficients& before = parent_control(start);
    ControlCoefficients& c = start.control;
    c.velocity_scale = before.velocity_scale;
    c.allowance_h0_m = before.allowance_h0_m;
    c.allowance_c = before.allowance_c;
    c.reference_depth_m = before.reference_depth_m;
    c.calibrated_in = before.calibrated_in != 0 ? before.calibrated_in : input_.parent->curve.number;
    c.scale_fate = Fate::held;
    c.allowance_fate = Fate::held;
    const ReachRow& was = input_.parent->reach[static_cast<std::size_t>(start.in_parent)].row;
    const std::string differences = scale_differences(was, row);
    if (differences.empty()) return;
    if (!input_.options.rescale) {
      result_.refusals.push_back(
          fmt::format("{}: the reach file says that the scale changed: {}. Holding it would be wrong; scale "
                      "it by the rows with "
                      "--rescale, or correct the reach file",
                      c.name, differences));
      return;
    }
    c.velocity_scale *= hydraulics::velocity_scale(row) / hydraulics::velocity_scale(was);
    c.scale_fate = Fate::rescaled;
    start.extra_ln_v1_sd = scale_sd_of(row);
    result_.remarks.push_back(
        fmt::format("{}: velocity scale rescaled by the reach rows: {}; its sd grows by {:.0f} %", c.name,
                    differences, 100 * start.extra_ln_v1_sd));
  }

  void refuse_missing() {
    for (const auto& name : nowhere_) {
      result_.refusals.push_back(fmt::format(
          "survey {} holds no points of {}, and there is no curve to carry it from", input_.survey.id, name));
    }
    if (missing_.empty()) return;
    std::string names;
    for (const auto& name : missing_) names += (names.empty() ? "" : ",") + name;
    result_.refusals.push_back(
        fmt::format("survey {} does not show {}; where the ground there is as it was, keep what the "
                    "parent's survey showed with --carry {}",
                    input_.survey.id, names, quoted(names)));
  }

  void refuse_unknown_carry(const std::vector<SurveyedControl>& surveyed) {
    for (const auto& name : input_.options.carry) {
      const auto named = [&](const SurveyedControl& s) { return s.surveyed.name == name; };
      const auto at = std::find_if(surveyed.begin(), surveyed.end(), named);
      if (at == surveyed.end()) {
        result_.refusals.push_back(fmt::format("--carry {}: there is no such control", name));
      } else if (at->found) {
        result_.remarks.push_back(fmt::format(
            "{} was to be carried, but survey {} shows it: its points are used", name, input_.survey.id));
      }
    }
  }

  void name_dropped() {
    if (!input_.parent) return;
    for (std::size_t i = 0; i < input_.parent->curve.controls.size(); ++i) {
      const bool kept =
          std::any_of(result_.controls.begin(), result_.controls.end(),
                      [&](const ControlStart& start) { return start.in_parent == static_cast<int>(i); });
      if (!kept && result_.refusals.empty()) {
        result_.remarks.push_back(fmt::format("the parent's control {} has no reach row now: it is gone",
                                              input_.parent->curve.controls[i].name));
      }
    }
  }

  static std::string quoted(const std::string& names) {
    return names.find(' ') == std::string::npos ? names : "\"" + names + "\"";
  }

  [[nodiscard]] const ControlCoefficients& parent_control(const ControlStart& start) const {
    return input_.parent->curve.controls[static_cast<std::size_t>(start.in_parent)];
  }

  const Input& input_;
  Inheritance result_;
  std::vector<std::string> missing_, nowhere_;
};

}  // namespace

Inheritance inherit(const Input& input, const std::vector<SurveyedControl>& surveyed) {
  return Inheritor(input).run(surveyed);
}

}  // namespace scourbook::rederivation
