#pragma once
// What a control takes over from the parent curve, and what it starts with anew.

#include <string>
#include <vector>

#include "rederivation/derive.hpp"
#include "rederivation/surveyed_control.hpp"

namespace scourbook::rederivation {

/// Prior sds of unknowns (own rules, tuned on synthetic stations).
namespace prior_sd {
inline constexpr double kLnV1 = 0.30, kLnV1Crest = 0.20;
inline constexpr double kDh = 0.20, kDhCrest = 0.05;  // m
inline constexpr double kDc = 0.10, kDcCrest = 0.15;
inline constexpr double kSurveyLevel = 0.03;  // m, e_s where the survey states none
inline constexpr double kEk = 0.01;           // m
inline constexpr double kEc = 0.02;
inline constexpr double kCarried = 3;         // times e_k and ec of a carried control
inline constexpr double kLeastLevel = 0.001;  // m, e_s at least
inline constexpr double kLeastMarks = 0.01;   // m, e_s from marks on fixed ground
}  // namespace prior_sd

/// One control of the new curve before it is fitted: surveyed coefficients, v1, b, dh, dc and delta as they
/// begin, trims zero, fates set.
struct ControlStart {
  ControlCoefficients control;
  int in_parent = -1;  ///< index in the parent's controls whose scale and allowances it takes over; -1: new
  double extra_ln_v1_sd = 0;  ///< of a rescaled velocity scale
  bool narrow_slot = false;
  double scale_sd = 0;  ///< prior sd of ln v1 of a new control
};

struct Inheritance {
  std::vector<std::string> refusals;
  std::vector<std::string> remarks;
  std::vector<ControlStart> controls;  ///< in the order of input.reach
};

/// Without a parent all controls are new. A control of the parent is taken over where flow law, cross-section
/// and part are the same; where slope, roughness, meandering or coefficient differ, only with `rescale`.
[[nodiscard]] Inheritance inherit(const Input& input, const std::vector<SurveyedControl>& surveyed);

}  // namespace scourbook::rederivation
