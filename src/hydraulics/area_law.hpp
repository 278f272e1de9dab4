#pragma once
// The power law of a section's area, and the section coefficient of each flow law.

#include <optional>
#include <vector>

#include "hydraulics/section.hpp"

namespace scourbook::hydraulics {

/// Levels between which a control's law is fitted, m.
struct LevelRange {
  double from_m = 0;
  double to_m = 0;
  /// Where the offset lies or is sought, at most from_m: the bed's lowest point, where the range begins above
  /// it.
  std::optional<double> foot_m = {};
  [[nodiscard]] double foot() const { return foot_m.value_or(from_m); }
};

/// area = w (z - h0)^c over a range of levels.
struct AreaLaw {
  double h0_m = 0;        ///< offset
  double w = 0;           ///< area coefficient, m^(2-c)
  double c = 0;           ///< area exponent
  double max_misfit = 0;  ///< largest |law / section - 1| over the fitted levels that are wet
  /// Fitted levels where it misses by over 10 %, and those where the section is dry (they take no part in the
  /// fit).
  std::vector<double> missed_levels_m;
  /// The lowest 5 % of the range's depth hold under 0.1 % of the area at its top. Says nothing about a crest.
  bool narrow_slot = false;
};

/// nowhere_wet: fewer than two of the levels are wet. empty_range: the range has no depth.
enum class LawStatus { not_run, ok, nowhere_wet, empty_range };
struct AreaLawFit {
  LawStatus status = LawStatus::not_run;
  AreaLaw law;
};

/// The 80 levels of the fit: evenly spaced from 5 % of the range's depth to its top.
[[nodiscard]] std::vector<double> law_levels(LevelRange range);

/// Log-log least squares of area on depth over law_levels, equal weight, offset = range.foot().
[[nodiscard]] AreaLawFit fit_area_law(const SectionPart& part, LevelRange range);
/// The same with the offset fitted: h0 = range.foot() + x (to - from), x in [-0.05, 0.045] that minimises the
/// squared log residual (a channel control). x is found as the root of the derivative, so that it does not
/// hang on rounding: the same section in other units gives the same law.
[[nodiscard]] AreaLawFit fit_area_law_free_offset(const SectionPart& part, LevelRange range);

/// Velocity exponent b: 2/3 manning, 1/2 chezy and critical.
[[nodiscard]] double velocity_exponent(FlowLaw law);
/// Velocity scale v1 of a reach row: sqrt(S)/(n m), C sqrt(S)/m, or C_d. The row must hold what its law
/// needs.
[[nodiscard]] double velocity_scale(const ReachRow& row);
/// Section coefficient f of the law: for manning and chezy exp(mean over law_levels of [ln(area R^b) - (b+c)
/// ln d]), d = z - law.h0, dry levels left out; for critical w sqrt(g/c) (2c/(2c+1))^(c+1/2) (Chow 1959,
/// chapter 3, from memory: energy head d = y + A/(2T) over a section of area w y^c). `law` must come from a
/// fit with status ok.
[[nodiscard]] double section_coefficient(const SectionPart& part, const AreaLaw& law, LevelRange range,
                                         FlowLaw flow_law);

}  // namespace scourbook::hydraulics
