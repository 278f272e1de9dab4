#include "publish/check_parts.hpp"

#include <algorithm>
#include <cmath>

#include "history/derivation_input.hpp"
#include "hydraulics/power.hpp"
#include "rating/evaluate.hpp"
#include "rederivation/derive.hpp"

namespace scourbook::publish {
namespace {

bool same(const store::PublishedMonth& a, const store::PublishedMonth& b) {
  return a.month == b.month && a.time_ms == b.time_ms && a.value == b.value &&
         a.u95_tenth_pct == b.u95_tenth_pct && a.flags == b.flags && a.quality == b.quality &&
         a.curve == b.curve;
}

bool same(const store::PublishedDay& a, const store::PublishedDay& b) {
  return a.day == b.day && a.mean == b.mean && a.u95_tenth_pct == b.u95_tenth_pct && a.flags == b.flags &&
         a.quality == b.quality && a.share == b.share && a.curves == b.curves;
}

/// What derive was asked, as far as the curve tells.
history::DerivationRequest request_of(const RatingCurve& curve) {
  history::DerivationRequest request;
  request.station = curve.station;
  request.survey = curve.survey;
  request.from = curve.from;
  request.until = curve.until;
  request.descends_from = curve.parent;
  request.first = !curve.parent;
  request.options.hold = curve.hold;
  for (const ControlCoefficients& control : curve.controls) {
    if (control.survey_fate == Fate::carried) request.options.carry.push_back(control.name);
    if (control.scale_fate == Fate::rescaled) request.options.rescale = true;
  }
  for (const CurveGauging& gauging : curve.gaugings) {
    if (gauging.reason == "left out by name") request.options.leave_out.push_back(gauging.gauging);
    if (gauging.reason == "derived without gaugings") request.options.without_gaugings = true;
  }
  return request;
}

std::string first_of(const std::vector<std::string>& refusals) {
  return refusals.empty() ? std::string("refused without a reason") : refusals.front();
}

}  // namespace

std::string unfit(const Edition& edition) {
  const Period* before = nullptr;
  for (const Period& period : edition.periods) {
    if (period.until && *period.until <= period.from) return "a period ends before it begins";
    if (before != nullptr && (!before->until || *before->until > period.from)) return "its periods overlap";
    before = &period;
  }
  return {};
}

std::string unfit(const RatingCurve& curve) {
  if (curve.controls.empty()) return "it has no control";
  if (curve.bands.empty()) return "it has no band";
  const auto rises = [](const BandPoint& a, const BandPoint& b) { return a.level_m < b.level_m; };
  if (!std::is_sorted(curve.bands.begin(), curve.bands.end(), rises)) return "its bands do not rise";
  return {};
}

std::string difference(const store::Publication& kept, const store::Publication& again) {
  if (kept.from != again.from || kept.until != again.until || kept.decimals != again.decimals) {
    return "its range or decimals";
  }
  if (kept.months.size() != again.months.size()) return "the number of its months";
  if (kept.days.size() != again.days.size()) return "the number of its days";
  for (std::size_t i = 0; i < kept.months.size(); ++i) {
    if (!same(kept.months[i], again.months[i])) return "the values of " + format_month(kept.months[i].month);
  }
  for (std::size_t i = 0; i < kept.days.size(); ++i) {
    if (!same(kept.days[i], again.days[i])) return "the mean of " + format_day({kept.days[i].day});
  }
  return {};
}

double largest_gap(const RatingCurve& kept, const RatingCurve& again) {
  constexpr double kNone = 1e-9;  // m3/s
  double gap = 0;
  for (const BandPoint& point : kept.bands) {
    const double a = rating::evaluate(kept, point.level_m).discharge_m3s;
    const double b = rating::evaluate(again, point.level_m).discharge_m3s;
    if (a < kNone && b < kNone) continue;
    const bool both = a > 0 && b > 0;
    const double here =
        both ? std::abs(hydraulics::reproducible_log(a) - hydraulics::reproducible_log(b)) : 1;
    gap = std::max(gap, here);
  }
  return gap;
}

DerivedAgain derive_again(const store::Book& book, const RatingCurve& curve) {
  const std::int64_t act = book.curve_act(curve.station, curve.number);
  const auto collected = history::collect(book, request_of(curve), Known{act - 1});
  if (!collected.refusals.empty()) return {{}, first_of(collected.refusals)};
  auto result = rederivation::derive(collected.input);
  if (result.status != rederivation::Status::ok) return {{}, first_of(result.refusals)};
  return {std::move(result.curve), {}};
}

}  // namespace scourbook::publish
