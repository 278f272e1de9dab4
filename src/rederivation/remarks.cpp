#include "rederivation/remarks.hpp"

#include <fmt/format.h>

#include <cmath>
#include <set>

#include "rating/evaluate.hpp"
#include "rating/unknowns.hpp"

namespace scourbook::rederivation {
namespace {

constexpr double kLargeTrim = 3;  // prior sds

const ControlCoefficients* control_named(const RatingCurve& curve, const std::string& name) {
  for (const ControlCoefficients& control : curve.controls) {
    if (control.name == name) return &control;
  }
  return nullptr;
}

}  // namespace

void remark_trims(RatingCurve& curve, const rating::Prior& prior) {
  const auto unknowns = rating::unknowns_of(curve);
  const rating::Vector sds = rating::sds_given_held(prior);
  for (std::size_t i = 0; i < unknowns.size(); ++i) {
    const auto kind = unknowns[i].kind;
    const bool trim = kind == rating::UnknownKind::level_error || kind == rating::UnknownKind::e_k ||
                      kind == rating::UnknownKind::ec;
    const auto at = static_cast<Eigen::Index>(i);
    const double sd = sds(at);
    const double move = rating::value_of(curve, unknowns[i]) - prior.mean(at);
    if (!trim || prior.held[i] || std::abs(move) <= kLargeTrim * sd) continue;
    curve.remarks.push_back(
        fmt::format("trim {} moved by {:+.3f}{}, {:.1f} of its prior sds: is the survey, the gauge zero or "
                    "a gauging wrong, or did the scale change?",
                    rating::name_of(curve, unknowns[i]), move, kind == rating::UnknownKind::ec ? "" : " m",
                    std::abs(move) / sd));
  }
  for (const ControlCoefficients& control : curve.controls) {
    if (control.surveyed_c + control.allowance_c + control.trim_c < rating::kLeastAreaExponent) {
      curve.remarks.push_back(fmt::format("{}: the area exponent was bounded below at {}", control.name,
                                          rating::kLeastAreaExponent));
    }
  }
}

/// Which of section and channel governs at levels between the higher offset and the top.
void remark_governing(RatingCurve& curve, double top_m) {
  const double from = rating::cease_to_flow_m(curve);
  if (from >= top_m) {
    curve.remarks.push_back(
        fmt::format("flow begins at {:.3f} m, above the surveyed top {:.3f} m", from, top_m));
    return;
  }
  constexpr int kSteps = 200;
  std::set<int> governing;
  for (int i = 1; i <= kSteps; ++i) {
    governing.insert(rating::evaluate(curve, from + (top_m - from) * i / kSteps).control);
  }
  const bool both = control_named(curve, "section") != nullptr && control_named(curve, "channel") != nullptr;
  for (std::size_t k = 0; k < curve.controls.size(); ++k) {
    const ControlCoefficients& control = curve.controls[k];
    if (control.kind == ControlKind::overbank) {
      if (control.h0_m >= top_m) {
        curve.remarks.push_back(
            fmt::format("{} never adds: its offset {:.3f} m lies above the surveyed top {:.3f} m",
                        control.name, control.h0_m, top_m));
      }
    } else if (both && governing.count(static_cast<int>(k)) == 0) {
      curve.remarks.push_back(
          fmt::format("{} never governs between {:.3f} and {:.3f} m", control.name, from, top_m));
    }
  }
  if (both && !curve.takeover_level_m) {
    curve.remarks.push_back(
        "the channel nowhere takes over from the section: the smaller of both flows counts at every "
        "level");
  }
}

void remark_buried_crest(RatingCurve& curve) {
  const ControlCoefficients* section = control_named(curve, "section");
  const ControlCoefficients* channel = control_named(curve, "channel");
  if (section == nullptr || channel == nullptr || section->survey_fate != Fate::carried) return;
  if (channel->lowest_point_m <= section->lowest_point_m) return;
  curve.remarks.insert(
      curve.remarks.begin(),
      fmt::format("THE NEW CHANNEL BED ({:.3f} m) LIES ABOVE THE CARRIED CREST ({:.3f} m): the crest is "
                  "likely buried or gone; survey it before this curve is used",
                  channel->lowest_point_m, section->lowest_point_m));
}

}  // namespace scourbook::rederivation
