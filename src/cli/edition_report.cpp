#include "cli/edition_report.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <set>

#include "cli/table.hpp"

namespace scourbook::cli {
namespace {

struct CurveBrief {
  std::string survey;
  std::string gaugings;
};

CurveBrief brief_of(const store::Book& book, const std::string& station, const Period& period) {
  if (!period.curve) return {};
  const auto curve = book.curve(station, *period.curve);
  if (!curve) return {"?", "?"};
  const auto used = std::count_if(curve->gaugings.begin(), curve->gaugings.end(),
                                  [](const CurveGauging& g) { return g.use != GaugingUse::left_out; });
  return {curve->survey, std::to_string(used)};
}

std::string hours(Millis blend) {
  return blend.count() == 0 ? std::string()
                            : fmt::format("{:g} h", static_cast<double>(blend.count()) / 3.6e6);
}

/// What a set of periods says at one time; the blend belongs to the first hours of a period.
std::string holder_at(const std::vector<Period>& periods, Instant time) {
  const int at = history::period_at(periods, time);
  if (at < 0) return "no period";
  const Period& period = periods[static_cast<std::size_t>(at)];
  const bool blending = period.curve && time < period.from + period.blend;
  return history::describe_holder(period) + (blending ? " (blend)" : "");
}

}  // namespace

std::string end_text(const std::optional<Instant>& until, UtcOffset offset) {
  return until ? format_time(*until, offset) : "open";
}

std::string periods_text(const store::Book& book, const std::string& station,
                         const std::vector<Period>& periods, UtcOffset offset) {
  Table table({{"from"}, {"until"}, {"curve"}, {"survey"}, {"gaugings", Align::right}, {"blend"}});
  for (const Period& period : periods) {
    const CurveBrief brief = brief_of(book, station, period);
    table.add({format_time(period.from, offset), end_text(period.until, offset),
               history::describe_holder(period), brief.survey, brief.gaugings, hours(period.blend)});
  }
  return periods.empty() ? std::string("  no periods\n") : table.text();
}

Json periods_json(const store::Book& book, const std::string& station, const std::vector<Period>& periods,
                  UtcOffset offset) {
  Json json = Json::array();
  for (const Period& period : periods) {
    Json one = {{"from", format_time(period.from, offset)}};
    one["until"] = period.until ? Json(format_time(*period.until, offset)) : Json(nullptr);
    one["curve"] = period.curve ? Json(*period.curve) : Json(nullptr);
    one["none"] = period.curve ? Json(nullptr) : Json(word(period.none));
    one["survey"] = period.curve ? Json(brief_of(book, station, period).survey) : Json(nullptr);
    one["blend_hours"] = static_cast<double>(period.blend.count()) / 3.6e6;
    json.push_back(std::move(one));
  }
  return json;
}

std::vector<Change> changes_between(const std::vector<Period>& before, const std::vector<Period>& after) {
  std::set<Instant> times;
  for (const auto* periods : {&before, &after}) {
    for (const Period& period : *periods) {
      times.insert(period.from);
      times.insert(period.from + period.blend);
      if (period.until) times.insert(*period.until);
    }
  }
  std::vector<Change> changes;
  for (auto time = times.begin(); time != times.end(); ++time) {
    const std::string was = holder_at(before, *time), is = holder_at(after, *time);
    if (was == is) continue;
    const auto next = std::next(time);
    const std::optional<Instant> until = next == times.end() ? std::nullopt : std::optional(*next);
    const bool joins = !changes.empty() && changes.back().until == *time && changes.back().before == was &&
                       changes.back().after == is;
    if (joins) {
      changes.back().until = until;
    } else {
      changes.push_back({*time, until, was, is});
    }
  }
  return changes;
}

std::string changes_text(const std::vector<Change>& changes, UtcOffset offset) {
  if (changes.empty()) return "  nothing changes\n";
  Table table({{"from"}, {"until"}, {"before"}, {"after"}});
  for (const Change& change : changes) {
    table.add(
        {format_time(change.from, offset), end_text(change.until, offset), change.before, change.after});
  }
  return table.text();
}

Json changes_json(const std::vector<Change>& changes, UtcOffset offset) {
  Json json = Json::array();
  for (const Change& change : changes) {
    Json one = {{"from", format_time(change.from, offset)}};
    one["until"] = change.until ? Json(format_time(*change.until, offset)) : Json(nullptr);
    one["before"] = change.before;
    one["after"] = change.after;
    json.push_back(std::move(one));
  }
  return json;
}

}  // namespace scourbook::cli
