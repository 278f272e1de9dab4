#pragma once
// A curve as people and programs read it: what was held, recomputed and refitted, side by side.

#include <optional>
#include <string>
#include <vector>

#include "cli/context.hpp"
#include "terms/curve.hpp"

namespace scourbook::cli {

/// The curve before, control by control of `curve`; empty where there is none to show.
using Before = std::vector<std::optional<ControlCoefficients>>;

/// Before of a stored curve: the controls of its parent with the same names.
[[nodiscard]] Before before_of(const RatingCurve& curve, const std::optional<RatingCurve>& parent);

[[nodiscard]] std::string controls_text(const RatingCurve& curve, const Before& before);
[[nodiscard]] std::string gaugings_text(const RatingCurve& curve);
[[nodiscard]] std::string diagnostics_text(const RatingCurve& curve);
[[nodiscard]] std::string remarks_text(const RatingCurve& curve);

/// Keys: control, held, recomputed, refitted, effective, sd, before; quantities end in their unit.
[[nodiscard]] Json controls_json(const RatingCurve& curve, const Before& before);
[[nodiscard]] Json gaugings_json(const RatingCurve& curve);
[[nodiscard]] Json diagnostics_json(const RatingCurve& curve);
/// What stands above the controls: number, survey, parent, range, hold.
[[nodiscard]] Json curve_head_json(const RatingCurve& curve, UtcOffset offset);
[[nodiscard]] std::string curve_head_text(const RatingCurve& curve, UtcOffset offset);

}  // namespace scourbook::cli
