#include "publish/trace_parts.hpp"

#include <fmt/format.h>

#include <cstring>

#include "publish/publication.hpp"

namespace scourbook::publish {

TracedState state_of(const store::Book& book, const TraceRequest& request) {
  TracedState state;
  std::optional<int> edition = request.edition;
  std::optional<std::int64_t> data = request.data_version;
  Known made = request.known;
  // An unknown station is refused by view_of below.
  const auto number =
      edition || data ? std::nullopt : publication_at(book, request.station, request.time, request.known);
  if (number) {
    state.publication = book.publication(request.station, *number);
    const auto replay = book.replay(request.station, state.publication->replay);
    if (!replay) {
      throw store::StoreError(store::StoreError::Kind::damaged,
                              fmt::format("publication {} of {} has no replay {}", *number, request.station,
                                          state.publication->replay));
    }
    edition = replay->edition;
    data = replay->data_version;
    made = Known{state.publication->act - 1};
  }
  state.view = history::view_of(book, request.station, request.known, edition, data);
  if (!state.view.edition) {
    throw store::StoreError(
        store::StoreError::Kind::refused,
        fmt::format("station {} has no edition yet: derive a curve and adopt it", request.station));
  }
  state.made = state.view;
  state.made.known = made;
  state.settings = book.settings(made);
  state.clock = book.station(request.station, made).value().value.clock;
  return state;
}

std::vector<Act> ActNumbers::load(const store::Book& book) const {
  std::vector<Act> acts;
  for (const std::int64_t number : numbers_) acts.push_back(book.act(number));
  return acts;
}

void complete(const store::Book& book, const history::View& view, TracedCurve& traced) {
  const auto survey = book.survey_version(view.station, traced.curve.survey, traced.curve.survey_version);
  if (survey) {
    traced.survey_source = survey->source;
    traced.survey_file = file_name(book, survey->source.file);
  }
  traced.out_of_date = history::out_of_date(book, traced.curve, view.known);
}

void add_acts(const store::Book& book, const RatingCurve& curve, std::int64_t curve_act, ActNumbers& acts) {
  const std::string& station = curve.station;
  acts.add(curve_act);
  const auto add = [&](const auto& stored) {
    if (stored) acts.add(stored->act);
  };
  add(book.survey_version(station, curve.survey, curve.survey_version));
  // A carried control keeps its parent's survey.
  for (const auto& control : curve.controls) {
    add(book.survey_version(station, control.survey, control.survey_version));
  }
  for (const PinnedReach& pinned : curve.reach) {
    const auto row = book.reach_row(station, pinned.row, pinned.version);
    if (row) acts.add(row->stored.act);
  }
  for (const CurveGauging& offered : curve.gaugings) {
    add(book.gauging_version(station, offered.gauging, offered.version));
  }
}

void add_acts(const store::Book& book, const TracedState& state, ActNumbers& acts) {
  acts.add(state.view.edition->act);
  if (!state.publication) return;
  acts.add(state.publication->act);
  const auto replay = book.replay(state.view.station, state.publication->replay);
  if (replay) acts.add(replay->act);
}

void add_level_acts(const store::Book& book, const history::View& view, Instant from, Instant until,
                    ActNumbers& acts) {
  const Known data{view.data_version};
  std::int64_t in_force = 0;  // act of the gauge zero at `from`
  for (const auto& row : book.gauge_zeros(view.station, data)) {
    if (row.value.valid_from <= from) in_force = row.act;
    if (row.value.valid_from > from && row.value.valid_from <= until) acts.add(row.act);
  }
  acts.add(in_force);
  for (const auto& row : book.stage_corrections(view.station, data)) {
    if (row.value.from <= until && row.value.until > from) acts.add(row.act);
  }
}

bool same_bits(const std::optional<double>& a, const std::optional<double>& b) {
  if (a.has_value() != b.has_value()) return false;
  return !a || std::memcmp(&*a, &*b, sizeof *a) == 0;
}

std::string file_name(const store::Book& book, std::int64_t file) {
  const auto record = book.file(file);
  return record ? record->name : std::string("?");
}

}  // namespace scourbook::publish
