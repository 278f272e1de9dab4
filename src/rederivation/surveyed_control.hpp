#pragma once
// What a survey shows of one control: range, offset, area law, section coefficient.

#include <optional>
#include <string>
#include <vector>

#include "hydraulics/section.hpp"
#include "rederivation/derive.hpp"
#include "terms/curve.hpp"

namespace scourbook::rederivation {

/// The part of the surveyed section that a control's law is made of.
struct SurveyedControl {
  bool found = false;                 ///< the survey holds the cross-section and part
  std::vector<std::string> refusals;  ///< why no law could be made, in words
  std::vector<std::string> remarks;
  hydraulics::SectionPart part{
      std::vector<hydraulics::Strip>{}};  ///< above the spill level, for an overbank control
  ControlCoefficients surveyed;  ///< kind, section and the surveyed coefficients; the rest as default
  bool narrow_slot = false;      ///< the offset is uncertain
  double top_m = 0;              ///< highest level that the survey covers for this control
};

/// A control's name: "section", "channel", "overbank", or "overbank PART" where `several` overbank controls
/// are.
[[nodiscard]] std::string control_name(const ReachRow& row, bool several);

/// One for each row, in their order. Ranges where the rows leave them blank: a section control from its
/// lowest point to 0.6 m above it, or its top; a channel from its lowest point to the lower end of its part,
/// with overbank controls 1 m above that, or the top of their range; an overbank control from where water
/// gets in (the higher of its lowest point and the spill level) to its top. `parent` gives the ranges of
/// controls that the survey lacks.
[[nodiscard]] std::vector<SurveyedControl> survey_controls(const Input& input);

/// Geometric mean of the depths over which the law was fitted, m.
[[nodiscard]] double mean_depth_m(const ControlCoefficients& control);

}  // namespace scourbook::rederivation
