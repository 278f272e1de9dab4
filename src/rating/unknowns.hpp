#pragma once
// The unknowns of a curve: their names, how they make the effective coefficients, and the derivatives of ln
// Q.
//
//   h0 = surveyed + dh + e_s + e_k        c = max(0.5, surveyed + dc + ec)
//   Q(z) = v1 f (z - h0)^(b+c) delta^-(c - surveyed c)
//
// The level error e_s of the survey is shared by all controls that come from it. A carried control keeps an
// older survey: its e_k holds all that is known of its level, and e_s does not apply.

#include <string>
#include <vector>

#include "rating/least_squares.hpp"
#include "terms/curve.hpp"

namespace scourbook::rating {

/// Effective area exponents are bounded below here: a section whose width shrinks faster with depth is none.
inline constexpr double kLeastAreaExponent = 0.5;

enum class UnknownKind { level_error, ln_v1, dh, dc, e_k, ec };

struct Unknown {
  UnknownKind kind = UnknownKind::level_error;
  int control = -1;  ///< index in the curve's controls; -1 for level_error
  friend bool operator==(const Unknown&, const Unknown&) = default;
};

/// All unknowns of a curve, in the order of its covariance: e_s, then ln_v1, dh, dc, e_k, ec of each control.
[[nodiscard]] std::vector<Unknown> unknowns_of(const RatingCurve& curve);
/// "e_s", "channel.ln_v1", "overbank left.dh", ...
[[nodiscard]] std::string name_of(const RatingCurve& curve, Unknown unknown);

[[nodiscard]] double value_of(const RatingCurve& curve, Unknown unknown);
/// Sets one unknown; call `refresh` after the last of them.
void set_value(RatingCurve& curve, Unknown unknown, double value);

/// Recomputes h0, exponents and flow scales from the unknowns, and the takeover, searched up to `top_m`.
void refresh(RatingCurve& curve, double top_m);

/// d ln Q(z) / d unknown, in the order of `unknowns`; at a takeover from above; all 0 where there is no flow.
[[nodiscard]] Vector ln_q_gradient(const RatingCurve& curve, double level_m,
                                   const std::vector<Unknown>& unknowns);
/// d h0 / d unknown of one control: 1 or 0.
[[nodiscard]] Vector offset_gradient(const RatingCurve& curve, int control,
                                     const std::vector<Unknown>& unknowns);

}  // namespace scourbook::rating
