#include "publish/trace_parts.hpp"

#include <algorithm>

#include "publish/publication.hpp"

namespace scourbook::publish {

TracedState state_of(const store::Book& book, const TraceRequest& request) {
  TracedState state;
  std::optional<int> edition = request.edition;
  std::optional<std::int64_t> data = request.data_version;
  // An unknown station is refused by view_of below.
  if (!edition && !data) {
    if (const auto number = publication_at(book, request.station, request.time, request.known)) {
      state.publication = book.publication(request.station, *number);
      const auto replay = book.replay(request.station, state.publication->replay);
      edition = replay->edition;
      data = replay->data_version;
    }
  }
  state.view = history::view_of(book, request.station, request.known, edition, data);
  if (!state.view.edition) {
    throw store::StoreError(store::StoreError::Kind::refused,
                            request.station + " has no edition yet: derive a curve and adopt it");
  }
  state.settings = book.settings(request.known);
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

void add_acts(const store::Book& book, const std::string& station, const TracedCurve& traced,
              ActNumbers& acts) {
  acts.add(traced.act);
  const auto survey = book.survey_version(station, traced.curve.survey, traced.curve.survey_version);
  if (survey) acts.add(survey->act);
  for (const CurveGauging& used : traced.curve.gaugings) {
    const auto gauging = book.gauging_version(station, used.gauging, used.version);
    if (gauging) acts.add(gauging->act);
  }
}

void add_acts(const store::Book& book, const TracedState& state, ActNumbers& acts) {
  acts.add(state.view.edition->act);
  if (!state.publication) return;
  acts.add(state.publication->act);
  const auto replay = book.replay(state.view.station, state.publication->replay);
  if (replay) acts.add(replay->act);
}

std::string file_name(const store::Book& book, std::int64_t file) {
  const auto record = book.file(file);
  return record ? record->name : std::string("?");
}

}  // namespace scourbook::publish
