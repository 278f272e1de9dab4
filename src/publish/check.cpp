#include "publish/check.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "history/derivation_input.hpp"
#include "publish/publication.hpp"
#include "rating/evaluate.hpp"
#include "rederivation/derive.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

constexpr double kRederived = 1e-6;  // |ln Q|

class Checker {
 public:
  Checker(const store::Book& book, const CheckOptions& options) : book_(book), options_(options) {}

  CheckReport run() {
    report_.damage =
        book_.verify([&](std::int64_t done, std::int64_t all) { tell("reading rows", done, all); });
    report_.acts = book_.newest_act();
    for (const auto& station : book_.stations()) {
      const std::string& id = station.value.id;
      guarded("replay", id, [&] { replays(id); });
      guarded("publication", id, [&] { publications(id); });
      guarded("curve", id, [&] { out_of_date(id); });
      if (options_.rederive) guarded("curve", id, [&] { rederive(id); });
    }
    return std::move(report_);
  }

 private:
  void tell(const std::string& what, std::int64_t done, std::int64_t all) const {
    if (options_.progress) options_.progress(what, done, all);
  }

  void damage(const std::string& table, std::int64_t act, const std::string& text) {
    report_.damage.push_back({table, act, text});
  }

  /// What cannot be read any more is damage, and the rest is still looked at.
  template <class Work>
  void guarded(const std::string& table, const std::string& station, Work work) {
    try {
      work();
    } catch (const store::StoreError& error) {
      damage(table, 0, fmt::format("{}: {}", station, error.what()));
    }
  }

  void replays(const std::string& station) {
    const auto all = book_.replays(station);
    for (const auto& kept : all) {
      ++report_.replays;
      const auto view = history::view_of(book_, station, {}, kept.edition, kept.data_version);
      const auto again =
          replay::make_replay(book_, view, kept.from, kept.until, [&](std::int64_t done, std::int64_t of) {
            tell(fmt::format("replay {} of {}", kept.number, station), done, of);
          });
      report_.replay_months += static_cast<std::int64_t>(again.months.size());
      compare(kept, again);
    }
  }

  void compare(const store::ReplayRecord& kept, const store::ReplayRecord& again) {
    if (kept.months.size() != again.months.size()) {
      damage("replay_month", kept.act,
             fmt::format("{} replay {}: {} months kept, {} computed again", kept.station, kept.number,
                         kept.months.size(), again.months.size()));
      return;
    }
    for (std::size_t i = 0; i < kept.months.size(); ++i) {
      const auto& a = kept.months[i];
      const auto& b = again.months[i];
      if (a.month == b.month && a.values == b.values && a.sha256 == b.sha256) continue;
      damage("replay_month", kept.act,
             fmt::format("{} replay {}: {} computed again gives other flows", kept.station, kept.number,
                         format_month(a.month)));
    }
  }

  void publications(const std::string& station) {
    for (const auto& head : book_.publications(station)) {
      ++report_.publications;
      const auto kept = book_.publication(station, head.number);
      const auto replay = book_.replay(station, head.replay);
      if (!kept || !replay) {
        damage("publication", head.act,
               fmt::format("{} publication {} has no replay {}", station, head.number, head.replay));
        continue;
      }
      const auto again = make_publication(book_, *replay, [&](std::int64_t done, std::int64_t of) {
        tell(fmt::format("publication {} of {}", head.number, station), done, of);
      });
      compare(*kept, again);
    }
  }

  void compare(const store::Publication& kept, const store::Publication& again) {
    std::int64_t other = 0;
    std::string first;
    const auto differs = [&](const std::string& where) {
      if (other++ == 0) first = where;
    };
    if (kept.months.size() != again.months.size() || kept.days.size() != again.days.size()) {
      differs("its number of months or days");
    }
    for (std::size_t m = 0; m < std::min(kept.months.size(), again.months.size()); ++m) {
      const auto& a = kept.months[m];
      const auto& b = again.months[m];
      report_.published_values += static_cast<std::int64_t>(a.value.size());
      const bool same = a.month == b.month && a.time_ms == b.time_ms && a.value == b.value &&
                        a.u95_tenth_pct == b.u95_tenth_pct && a.flags == b.flags && a.quality == b.quality &&
                        a.curve == b.curve;
      if (!same) differs(format_month(a.month));
    }
    for (std::size_t d = 0; d < std::min(kept.days.size(), again.days.size()); ++d) {
      const auto& a = kept.days[d];
      const auto& b = again.days[d];
      ++report_.published_values;
      const bool same = a.day == b.day && a.mean == b.mean && a.u95_tenth_pct == b.u95_tenth_pct &&
                        a.flags == b.flags && a.quality == b.quality && a.share == b.share &&
                        a.curves == b.curves;
      if (!same) differs(format_day({a.day}));
    }
    if (other == 0) return;
    damage("publication", kept.act,
           fmt::format("{} publication {}: figures computed again differ, first at {} ({} places)",
                       kept.station, kept.number, first, other));
  }

  void out_of_date(const std::string& station) {
    const auto editions = book_.editions(station);
    for (const auto& curve : book_.curves(station)) {
      if (history::state_of(curve.number, editions) != history::CurveState::in_force) continue;
      for (const auto& reason : history::out_of_date(book_, curve)) {
        report_.out_of_date.push_back(fmt::format("{} curve {}: {}", station, curve.number, reason));
      }
    }
  }

  /// What derive was asked, as far as the curve tells.
  [[nodiscard]] static history::DerivationRequest request_of(const RatingCurve& curve) {
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

  void rederive(const std::string& station) {
    for (const auto& curve : book_.curves(station)) {
      if (curve.form != CurveForm::power) continue;
      ++report_.curves;
      const std::int64_t act = book_.curve_act(station, curve.number);
      const auto collected = history::collect(book_, request_of(curve), Known{act - 1});
      const auto again = rederivation::derive(collected.input);
      if (!collected.refusals.empty() || again.status != rederivation::Status::ok) {
        damage(
            "curve", act,
            fmt::format("{} curve {}: it cannot be derived again from what it names", station, curve.number));
        continue;
      }
      const double gap = largest_gap(curve, again.curve);
      report_.largest_rederivation_gap = std::max(report_.largest_rederivation_gap, gap);
      if (gap > kRederived) {
        damage("curve", act,
               fmt::format("{} curve {}: derived again, its flows differ by up to {:.2g} in ln Q", station,
                           curve.number, gap));
      }
    }
  }

  [[nodiscard]] static double largest_gap(const RatingCurve& kept, const RatingCurve& again) {
    double gap = 0;
    for (const BandPoint& point : kept.bands) {
      const double a = rating::evaluate(kept, point.level_m).discharge_m3s;
      const double b = rating::evaluate(again, point.level_m).discharge_m3s;
      if (a > 0 && b > 0) gap = std::max(gap, std::abs(std::log(a / b)));
      if ((a > 0) != (b > 0)) gap = std::max(gap, 1.0);
    }
    return gap;
  }

  const store::Book& book_;
  const CheckOptions& options_;
  CheckReport report_;
};

}  // namespace

CheckReport check(const store::Book& book, const CheckOptions& options) {
  return Checker(book, options).run();
}

}  // namespace scourbook::publish
