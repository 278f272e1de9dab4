#pragma once
// A curve as a function of level: the scalar definition that every replay kernel must equal bit by bit.

#include <optional>

#include "terms/curve.hpp"

namespace scourbook::rating {

/// What a curve says at one level.
struct Flow {
  double discharge_m3s = 0;
  int control = -1;  ///< index in controls of section or channel that governs, or of the highest overbank
                     ///< control that adds where there is neither; -1: no flow
};

/// Q(z) of one control: flow_scale * x^y(z - h0, exponent) with reproducible_pow; 0 for z <= h0.
[[nodiscard]] double control_flow(const ControlCoefficients& control, double level_m);

/// Q(z) = governing + sum of overbank controls, in the order of `controls`, where
///   governing = channel                 where there is no section, or at or above the takeover level,
///             = section                 where there is no channel,
///             = min(section, channel)   else.
[[nodiscard]] Flow evaluate(const RatingCurve& curve, double level_m);

/// dlnQ/dz at the level, 1/m, from above at a takeover; 0 where there is no flow.
[[nodiscard]] double log_slope(const RatingCurve& curve, double level_m);

/// sd of ln Q at a level: linear in level between the points of the band table, its end values beyond.
[[nodiscard]] double sd_ln_q(const RatingCurve& curve, double level_m);
/// u95 in percent: 100 (exp(1.96 sd) - 1), by reproducible_exp.
[[nodiscard]] double u95_pct(double sd);

/// The level of a flow: bisection between cease-to-flow and the level 50 m above it, to 1e-9 m; nothing for
/// flow <= 0 or beyond.
[[nodiscard]] std::optional<double> level_of(const RatingCurve& curve, double discharge_m3s);
/// The level at which flow ceases.
[[nodiscard]] double cease_to_flow_m(const RatingCurve& curve);

/// The lowest level at which the flow passes from section to channel (below it the section's flow is the
/// smaller, above it the channel's), searched up to `top_m`; nothing where there is none.
[[nodiscard]] std::optional<double> find_takeover(const ControlCoefficients& section,
                                                  const ControlCoefficients& channel, double top_m);

}  // namespace scourbook::rating
