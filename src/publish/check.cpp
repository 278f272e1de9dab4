#include "publish/check.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <set>

#include "publish/check_parts.hpp"
#include "publish/publication.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

constexpr double kRederived = 1e-6;  // |ln Q|: derivations may differ in the last digits between machines

class Checker {
 public:
  Checker(const store::Book& book, const CheckOptions& options) : book_(book), options_(options) {}

  CheckReport run() {
    report_.damage =
        book_.verify([&](std::int64_t done, std::int64_t all) { tell("reading rows", done, all); });
    guarded("station", "the stations", [&] {
      report_.acts = book_.newest_act();
      for (const auto& station : book_.stations()) check_station(station.value.id);
    });
    return std::move(report_);
  }

 private:
  void tell(const std::string& what, std::int64_t done, std::int64_t all) const {
    if (options_.progress) options_.progress(what, done, all);
  }

  void damage(const std::string& table, std::int64_t act, const std::string& text) {
    report_.damage.push_back({table, act, text});
  }

  /// What cannot be read any more is damage, and the rest is still looked at. A damaged book may hold
  /// anything, so nothing that is thrown ends the check.
  template <class Work>
  bool guarded(const std::string& table, const std::string& what, Work work) {
    try {
      work();
      return true;
    } catch (const std::exception& error) {
      damage(table, 0, fmt::format("{}: {}", what, error.what()));
      return false;
    }
  }

  void check_station(const std::string& station) {
    unfit_editions_.clear();
    differing_replays_.clear();
    // Without these nothing can be computed.
    if (!guarded("edition", station + " editions", [&] { fitness(station); })) return;
    guarded("replay", station + " replays", [&] { replays(station); });
    guarded("publication", station + " publications", [&] { publications(station); });
    guarded("curve", station + " curves", [&] { out_of_date(station); });
    if (options_.rederive) guarded("curve", station + " curves", [&] { rederive(station); });
  }

  /// Finds editions that no flow can be computed through.
  void fitness(const std::string& station) {
    std::set<int> unfit_curves;
    for (const auto& curve : book_.curves(station)) {
      const std::string why = unfit(curve);
      if (why.empty()) continue;
      unfit_curves.insert(curve.number);
      damage("curve", book_.curve_act(station, curve.number),
             fmt::format("{} curve {}: {}", station, curve.number, why));
    }
    for (const auto& edition : book_.editions(station)) {
      const std::string why = unfit(edition);
      if (!why.empty()) {
        damage("edition", edition.act, fmt::format("{} edition {}: {}", station, edition.number, why));
      }
      const bool names_unfit = std::any_of(
          edition.periods.begin(), edition.periods.end(),
          [&](const Period& period) { return period.curve && unfit_curves.count(*period.curve) != 0; });
      if (names_unfit || !why.empty()) unfit_editions_.insert(edition.number);
    }
  }

  void replays(const std::string& station) {
    for (const auto& kept : book_.replays(station)) {
      const std::string name = fmt::format("{} replay {}", station, kept.number);
      const bool computed =
          unfit_editions_.count(kept.edition) == 0 && guarded("replay", name, [&] { compare(kept, name); });
      if (!computed) differing_replays_.insert(kept.number);
    }
  }

  void compare(const store::ReplayRecord& kept, const std::string& name) {
    const auto view = history::view_of(book_, kept.station, {}, kept.edition, kept.data_version);
    const auto again =
        replay::make_replay(book_, view, kept.from, kept.until, [&](std::int64_t done, std::int64_t of) {
          tell(fmt::format("replay {} of {}", kept.number, kept.station), done, of);
        });
    ++report_.replays;
    report_.replay_months += static_cast<std::int64_t>(again.months.size());
    const auto differs = [&](const std::string& what) {
      differing_replays_.insert(kept.number);
      damage("replay_month", kept.act, name + ": " + what);
    };
    if (kept.months.size() != again.months.size()) {
      differs(fmt::format("{} months kept, {} computed again", kept.months.size(), again.months.size()));
      return;
    }
    for (std::size_t i = 0; i < kept.months.size(); ++i) {
      const auto& a = kept.months[i];
      const auto& b = again.months[i];
      if (a.month == b.month && a.values == b.values && a.sha256 == b.sha256) continue;
      differs(fmt::format("{} computed again gives other flows", format_month(a.month)));
    }
  }

  void publications(const std::string& station) {
    for (const auto& head : book_.publications(station)) {
      // That its replay cannot be computed again has been said.
      if (differing_replays_.count(head.replay) != 0) continue;
      const std::string name = fmt::format("{} publication {}", station, head.number);
      guarded("publication", name, [&] { compare(head, name); });
    }
  }

  void compare(const store::Publication& head, const std::string& name) {
    const auto replay = book_.replay(head.station, head.replay);
    if (!replay) {
      damage("publication", head.act, fmt::format("{}: its replay {} is not there", name, head.replay));
      return;
    }
    const auto kept = book_.publication(head.station, head.number).value();
    const auto again = make_publication(
        book_, *replay,
        [&](std::int64_t done, std::int64_t of) {
          tell(fmt::format("publication {} of {}", head.number, head.station), done, of);
        },
        Known{head.act - 1});
    ++report_.publications;
    for (const auto& month : again.months) {
      report_.published_values += static_cast<std::int64_t>(month.value.size());
    }
    report_.published_values += static_cast<std::int64_t>(again.days.size());
    const std::string where = difference(kept, again);
    if (!where.empty()) {
      damage("publication", head.act, fmt::format("{}: computed again, {} differs", name, where));
    }
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

  void rederive(const std::string& station) {
    const auto curves = book_.curves(station);
    std::int64_t done = 0;
    for (const auto& curve : curves) {
      tell(fmt::format("curve {} of {}", curve.number, station), done++,
           static_cast<std::int64_t>(curves.size()));
      if (curve.form != CurveForm::power || !unfit(curve).empty()) continue;
      const std::string name = fmt::format("{} curve {}", station, curve.number);
      guarded("curve", name, [&] { compare(curve, name); });
    }
  }

  void compare(const RatingCurve& curve, const std::string& name) {
    const std::int64_t act = book_.curve_act(curve.station, curve.number);
    const DerivedAgain again = derive_again(book_, curve);
    ++report_.curves;
    if (!again.curve) {
      damage("curve", act,
             fmt::format("{}: it cannot be derived again from what it names: {}", name, again.refusal));
      return;
    }
    const double gap = largest_gap(curve, *again.curve);
    report_.largest_rederivation_gap = std::max(report_.largest_rederivation_gap, gap);
    if (gap > kRederived) {
      damage("curve", act, fmt::format("{}: derived again, ln Q differs by up to {:.2g}", name, gap));
    }
  }

  const store::Book& book_;
  const CheckOptions& options_;
  CheckReport report_;
  std::set<int> unfit_editions_;     // of the station at hand
  std::set<int> differing_replays_;  // and those that could not be computed again
};

}  // namespace

CheckReport check(const store::Book& book, const CheckOptions& options) {
  return Checker(book, options).run();
}

}  // namespace scourbook::publish
