#include <fmt/format.h>

#include <algorithm>
#include <set>
#include <utility>

#include "history/state.hpp"

namespace scourbook::history {
namespace {

constexpr std::string_view kLeftOutByName = "left out by name";

std::string newer(const std::string& what, int now, int used) {
  return fmt::format("{} was corrected: version {}, the curve used version {}", what, now, used);
}

void check_gaugings(const store::Book& book, const RatingCurve& curve, Known known,
                    std::vector<std::string>& reasons) {
  const LevelDatum datum = level_datum(book, curve.station, known);
  for (const CurveGauging& used : curve.gaugings) {
    if (used.use == GaugingUse::left_out && used.reason == kLeftOutByName) continue;
    const std::string what = "gauging " + used.gauging;
    const auto now = book.gauging(curve.station, used.gauging, known);
    if (!now) {
      reasons.push_back(what + " was withdrawn");
    } else if (now->version != used.version) {
      reasons.push_back(newer(what, now->version, used.version));
    } else {
      const auto level = datum.level(now->value.mean_stage(), now->value.middle());
      const HeightChange moved = level.value_or(Level{}) - Level::from_metres(used.level_m);
      if (level && moved == HeightChange{}) continue;
      reasons.push_back(
          level ? fmt::format("the level of {} moved by {:+.3f} m (gauge zero or stage correction)", what,
                              moved.metres())
                : fmt::format("{} has no level any more: no gauge zero is known for its time", what));
    }
  }
}

void check_surveys(const store::Book& book, const RatingCurve& curve, Known known,
                   std::vector<std::string>& reasons) {
  std::set<std::pair<std::string, int>> used{{curve.survey, curve.survey_version}};
  for (const ControlCoefficients& control : curve.controls) {
    if (!control.survey.empty()) used.emplace(control.survey, control.survey_version);
  }
  for (const auto& [id, version] : used) {
    const auto now = book.survey(curve.station, id, known);
    if (!now) {
      reasons.push_back("survey " + id + " was withdrawn");
    } else if (now->version != version) {
      reasons.push_back(newer("survey " + id, now->version, version));
    }
  }
}

void check_reach(const store::Book& book, const RatingCurve& curve, Known known,
                 std::vector<std::string>& reasons) {
  if (curve.reach.empty()) return;
  const auto rows = book.reach_rows(curve.station, known);
  for (std::size_t i = 0; i < curve.reach.size(); ++i) {
    const PinnedReach& pinned = curve.reach[i];
    const std::string what = "the reach row of " + (i < curve.controls.size() ? curve.controls[i].name
                                                                              : std::to_string(pinned.row));
    const auto now =
        std::find_if(rows.begin(), rows.end(), [&](const auto& row) { return row.row == pinned.row; });
    if (now == rows.end()) {
      reasons.push_back(what + " was withdrawn");
    } else if (now->stored.version != pinned.version) {
      reasons.push_back(newer(what, now->stored.version, pinned.version));
    }
  }
}

}  // namespace

std::vector<std::string> out_of_date(const store::Book& book, const RatingCurve& curve, Known known) {
  std::vector<std::string> reasons;
  check_gaugings(book, curve, known, reasons);
  check_surveys(book, curve, known, reasons);
  check_reach(book, curve, known, reasons);
  if (curve.parent) {
    const auto parent = book.curve(curve.station, *curve.parent, known);
    if (parent && !out_of_date(book, *parent, known).empty()) {
      reasons.push_back(fmt::format("curve {}, from which it descends, is out of date", *curve.parent));
    }
  }
  return reasons;
}

}  // namespace scourbook::history
