#include "history/derivation_input.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <iterator>
#include <map>
#include <set>
#include <tuple>
#include <utility>

#include "history/adopt.hpp"
#include "history/level_datum.hpp"
#include "terms/nearest.hpp"

namespace scourbook::history {
namespace {

using rederivation::GaugingAtLevel;
using rederivation::ReachInput;

/// One collection under way: the request, what it may see, and what it found.
struct Collection {
  const store::Book& book;
  const DerivationRequest& request;
  Known known;
  UtcOffset offset;
  DerivationInput found;

  [[nodiscard]] std::string at(Instant time) const { return format_time(time, offset); }
  template <class... Parts>
  void refuse(fmt::format_string<Parts...> text, Parts&&... parts) {
    found.refusals.push_back(fmt::format(text, std::forward<Parts>(parts)...));
  }
};

std::string did_you_mean(const std::string& text, const std::vector<std::string>& known) {
  const std::string near = nearest_word(text, known);
  return near.empty() ? std::string() : fmt::format("; did you mean {}?", near);
}

void take_survey(Collection& work) {
  const DerivationRequest& request = work.request;
  const auto survey = work.book.survey(request.station, request.survey, work.known);
  if (survey) {
    work.found.input.survey = survey->value;
    work.found.input.survey_version = survey->version;
    return;
  }
  std::vector<std::string> ids;
  for (const auto& held : work.book.surveys(request.station, work.known)) ids.push_back(held.value.id);
  work.refuse("station {} has no survey {}{}", request.station, request.survey,
              ids.empty() ? "; take one in first" : did_you_mean(request.survey, ids));
}

void take_reach(Collection& work) {
  work.found.input.reach =
      reach_in_force(work.book.reach_rows(work.request.station, work.known), work.request.from);
  if (!work.found.input.reach.empty()) return;
  work.refuse("no reach row of station {} is in force at {}: take in one with valid_from no later than that",
              work.request.station, work.at(work.request.from));
}

void take_gaugings(Collection& work) {
  const DerivationRequest& request = work.request;
  const LevelDatum datum = level_datum(work.book, request.station, work.known);
  std::vector<std::string> ids;
  for (const auto& row : work.book.gaugings(request.station, work.known)) {
    const Instant middle = row.value.middle();
    if (middle < request.from || (request.until && middle >= *request.until)) continue;
    ids.push_back(row.value.id);
    const auto level = datum.level(row.value.mean_stage(), middle);
    if (level) {
      work.found.input.gaugings.push_back({row.value, row.version, level->metres()});
    } else {
      work.refuse("gauging {} of {} has no level: take in a gauge zero valid from then or before",
                  row.value.id, work.at(middle));
    }
  }
  for (const std::string& id : request.options.leave_out) {
    if (std::find(ids.begin(), ids.end(), id) != ids.end()) continue;
    work.refuse("gauging {}, to be left out, is not one of this period{}", id, did_you_mean(id, ids));
  }
}

/// The ids of gaugings that must not stand behind the parent.
std::set<std::string> own_gaugings(const Collection& work) {
  const auto& left_out = work.request.options.leave_out;
  std::set<std::string> own;
  for (const GaugingAtLevel& gauging : work.found.input.gaugings) {
    const std::string& id = gauging.gauging.id;
    const bool is_left_out = std::find(left_out.begin(), left_out.end(), id) != left_out.end();
    if (work.request.options.without_gaugings || !is_left_out) own.insert(id);
  }
  return own;
}

/// The parent and all before it, newest first.
std::vector<RatingCurve> line_of(const store::Book& book, const RatingCurve& parent) {
  std::vector<RatingCurve> line{parent};
  while (line.back().parent) {
    auto before = book.curve(parent.station, *line.back().parent);
    if (!before || before->number >= line.back().number)
      break;  // damage that check reports; never loop on it
    line.push_back(*std::move(before));
  }
  return line;
}

void check_gaugings_count_once(Collection& work, const RatingCurve& parent) {
  const std::set<std::string> own = own_gaugings(work);
  for (const RatingCurve& curve : line_of(work.book, parent)) {
    std::string shared;
    for (const CurveGauging& used : curve.gaugings) {
      if (used.use == GaugingUse::left_out || own.count(used.gauging) == 0) continue;
      shared += (shared.empty() ? "" : ",") + used.gauging;
    }
    if (shared.empty()) continue;
    const std::string who = curve.number == parent.number ? fmt::format("curve {}, the parent,", curve.number)
                                                          : fmt::format("curve {}, an ancestor of curve {},",
                                                                        curve.number, parent.number);
    if (work.request.options.without_gaugings) {
      work.refuse(
          "{} used gaugings inside the new period: {}; name a parent without them (--descends-from N)", who,
          shared);
    } else {
      work.refuse(
          "{} used gaugings that this derivation would use again: {}; name an earlier parent "
          "(--descends-from N), "
          "start a new lineage (--first) or leave them out (--leave-out {})",
          who, shared, shared);
    }
  }
}

rederivation::Parent whole_parent(const Collection& work, RatingCurve curve) {
  rederivation::Parent parent;
  const std::string& station = work.request.station;
  for (const PinnedReach& pinned : curve.reach) {
    const auto row = work.book.reach_row(station, pinned.row, pinned.version);
    if (!row) {
      throw store::StoreError(
          store::StoreError::Kind::damaged,
          fmt::format("curve {} of station {} names reach row {} version {}, which is not there",
                      curve.number, station, pinned.row, pinned.version));
    }
    parent.reach.push_back({row->stored.value, pinned});
  }
  const auto survey = work.book.survey_version(station, curve.survey, curve.survey_version);
  if (survey) parent.survey = survey->value;
  parent.curve = std::move(curve);
  return parent;
}

/// The parent by default, with a note where the choice is not plain.
std::optional<int> chosen_parent(Collection& work) {
  const DerivationRequest& request = work.request;
  if (request.first) return {};
  if (request.descends_from) return request.descends_from;
  const auto edition = work.book.newest_edition(request.station, work.known);
  const auto number = edition ? default_parent(*edition, request.from) : std::nullopt;
  if (!number) {
    if (!work.book.curves(request.station, work.known).empty()) {
      work.found.notes.push_back(fmt::format(
          "no curve of station {} was in force before {}: this is a first curve and starts a lineage; "
          "--descends-from N names a parent",
          request.station, work.at(request.from)));
    }
    return {};
  }
  const int last = period_at(edition->periods, request.from - Millis{1});
  if (last < 0 || edition->periods[static_cast<std::size_t>(last)].curve != number) {
    work.found.notes.push_back(
        fmt::format("no curve was in force just before {}: the parent is curve {}, the last before",
                    work.at(request.from), *number));
  }
  return number;
}

void take_parent(Collection& work) {
  const DerivationRequest& request = work.request;
  if (request.first && request.descends_from) {
    work.refuse("--first starts a new lineage and --descends-from names a parent: give one of them");
    return;
  }
  const std::optional<int> number = chosen_parent(work);
  if (!number) return;
  auto curve = work.book.curve(request.station, *number, work.known);
  if (!curve) {
    work.refuse("station {} has no curve {}", request.station, *number);
    return;
  }
  if (curve->form != CurveForm::power) {
    work.refuse("curve {} has the form {}, the new one {}: a parent has the same form", *number,
                word(curve->form), word(CurveForm::power));
    return;
  }
  check_gaugings_count_once(work, *curve);
  work.found.input.parent = whole_parent(work, *std::move(curve));
}

}  // namespace

std::vector<ReachInput> reach_in_force(const std::vector<store::Book::ReachId>& rows, Instant time) {
  using Key = std::tuple<ControlKind, std::string, std::string>;
  std::map<Key, const store::Book::ReachId*> newest;  // by control, cross-section, part
  std::map<ControlKind, Instant> since;               // newest valid_from of each kind
  for (const auto& row : rows) {
    const ReachRow& reach = row.stored.value;
    if (reach.valid_from > time) continue;
    newest[{reach.control, reach.cross_section, reach.part}] = &row;
    since[reach.control] = reach.valid_from;
  }
  const auto channel_is_on = [&](const std::string& cross_section, bool now) {
    return std::any_of(newest.begin(), newest.end(), [&](const auto& entry) {
      const ReachRow& reach = entry.second->stored.value;
      return reach.control == ControlKind::channel && reach.cross_section == cross_section &&
             (!now || reach.valid_from == since[ControlKind::channel]);
    });
  };
  std::vector<ReachInput> in_force;
  for (const auto& [key, row] : newest) {
    const ReachRow& reach = row->stored.value;
    if (reach.control == ControlKind::overbank) {
      const bool left =
          channel_is_on(reach.cross_section, false) && !channel_is_on(reach.cross_section, true);
      if (left && reach.valid_from < since[ControlKind::channel]) continue;
    } else if (reach.valid_from != since[reach.control]) {
      continue;
    }
    in_force.push_back({reach, {row->row, row->stored.version}});
  }
  return in_force;
}

std::optional<int> default_parent(const Edition& edition, Instant from) {
  std::optional<int> parent;
  for (const Period& period : edition.periods) {
    if (period.from < from && period.curve) parent = period.curve;
  }
  return parent;
}

DerivationInput collect(const store::Book& book, const DerivationRequest& request, Known known) {
  const auto station = book.station(request.station, known);
  if (!station) {
    throw store::StoreError(store::StoreError::Kind::refused, "there is no station " + request.station);
  }
  Collection work{book, request, known, station->value.clock.offset, {}};
  rederivation::Input& input = work.found.input;
  input.station = request.station;
  input.from = request.from;
  input.until = request.until;
  input.options = request.options;
  if (request.until && *request.until <= request.from) {
    work.refuse("the period ends at {}, not after its begin {}", work.at(*request.until),
                work.at(request.from));
  }
  take_survey(work);
  take_reach(work);
  take_gaugings(work);
  take_parent(work);
  return work.found;
}

}  // namespace scourbook::history
