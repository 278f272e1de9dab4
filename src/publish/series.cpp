#include "publish/series.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "publish/day_series.hpp"
#include "publish/published_series.hpp"
#include "rating/evaluate.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

using Kind = store::StoreError::Kind;
using RowSink = std::function<void(const SeriesRow&)>;

constexpr std::array<std::string_view, 4> kMeanWords = {"none", "day", "month", "water-year"};

void working_instants(const replay::Replayer& replayer, const SeriesRequest& request, const RowSink& sink) {
  replayer.run(request.from, request.until, [&](const replay::FlowBlock& block) {
    for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
      SeriesRow row;
      row.time = from_ms(block.time_ms[i]);
      if (!std::isnan(block.discharge_m3s[i])) {
        row.discharge_m3s = block.discharge_m3s[i];
        row.u95_pct = rating::u95_pct(block.sd_ln_q[i]);
        row.curves = {block.curve[i]};
      }
      row.quality = block.quality[i];
      row.flags = block.flags[i];
      sink(row);
    }
  });
}

void working_means(const replay::Replayer& replayer, const SeriesRequest& request, const StationClock& clock,
                   double least_share, const RowSink& sink) {
  DaySeries days(request.mean, clock, least_share, sink);
  const auto [first, end] = days_of(request, clock);
  replayer.day_means(first, end, [&](const replay::DayMean& mean) {
    DayValue value;
    value.day = mean.day;
    value.mean_m3s = mean.mean_m3s;
    value.sd_ln_q = mean.sd_ln_q;
    value.u95_pct = mean.mean_m3s ? rating::u95_pct(mean.sd_ln_q) : 0;
    value.flags = mean.flags;
    value.quality = mean.quality;
    value.share = mean.share;
    value.curves = mean.curves;
    days.add(value);
  });
  days.finish();
}

std::vector<std::string> surveys_of(const store::Book& book, const SeriesRequest& request) {
  std::vector<std::string> surveys;
  for (const auto& curve : book.curves(request.station, request.known)) {
    const auto at = static_cast<std::size_t>(curve.number);
    if (surveys.size() <= at) surveys.resize(at + 1);
    surveys[at] = curve.survey;
  }
  return surveys;
}

void run_published(const store::Book& book, SeriesHead& head, double least_share,
                   const std::function<void(const SeriesHead&)>& tell, const RowSink& row) {
  PublishedSeries published(book, head.request, head.station.clock);
  if (published.empty()) {
    throw store::StoreError(Kind::refused,
                            "nothing of " + head.station.id + " is published in what was asked for");
  }
  published.describe(head);
  tell(head);
  published.run(head, least_share, row);
}

void run_working(const store::Book& book, SeriesHead& head, double least_share,
                 const std::function<void(const SeriesHead&)>& tell, const RowSink& row) {
  const SeriesRequest& request = head.request;
  const history::View view =
      history::view_of(book, request.station, request.known, request.edition, request.data_version);
  const replay::Replayer replayer(book, view);  // refuses a view without an edition
  head.edition = view.edition->number;
  head.data_version = view.data_version;
  tell(head);
  if (request.mean == MeanOver::none) return working_instants(replayer, request, row);
  working_means(replayer, request, head.station.clock, least_share, row);
}

}  // namespace

std::string_view word(MeanOver mean) {
  return kMeanWords.at(static_cast<std::size_t>(mean));
}

std::optional<MeanOver> parse_mean_over(std::string_view text) {
  for (std::size_t i = 0; i < kMeanWords.size(); ++i) {
    if (text == kMeanWords[i]) return static_cast<MeanOver>(i);
  }
  return {};
}

void run_series(const store::Book& book, const SeriesRequest& request,
                const std::function<void(const SeriesHead&)>& tell,
                const std::function<void(const SeriesRow&)>& row) {
  const auto station = book.station(request.station, request.known);
  if (!station) throw store::StoreError(Kind::refused, "there is no station " + request.station);
  const store::Settings settings = book.settings(request.known);
  SeriesHead head;
  head.station = station->value;
  head.request = request;
  head.known_act = std::min(request.known.act, book.newest_act());
  head.digits = settings.published_digits;
  head.decimals = static_cast<int>(settings.published_decimals);
  head.survey_of_curve = surveys_of(book, request);
  if (request.published) return run_published(book, head, settings.least_share_of_day, tell, row);
  run_working(book, head, settings.least_share_of_day, tell, row);
}

}  // namespace scourbook::publish
