#include "publish/series.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <map>

#include "publish/publication.hpp"
#include "publish/rounding.hpp"
#include "rating/evaluate.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

using Kind = store::StoreError::Kind;
using RowSink = std::function<void(const SeriesRow&)>;

constexpr std::array<std::string_view, 4> kMeanWords = {"none", "day", "month", "water-year"};

/// A day's mean on its way into longer means.
struct DayValue {
  StationDay day{};
  std::optional<double> mean_m3s;
  double sd_ln_q = 0;
  Flags flags = 0;
  Quality quality = Quality::missing;
  double share = 0;
  std::vector<int> curves;
  std::int64_t units = 0;
  double u95_pct = 0;
};

/// The station days that begin in [from, until).
std::pair<StationDay, StationDay> days_in(Instant from, Instant until, const StationClock& clock) {
  const auto first_from = [&](Instant time) {
    const StationDay day = day_of(time, clock);
    return start_of(day, clock) >= time ? day : StationDay{day.number + 1};
  };
  return {first_from(from), first_from(until)};
}

/// The month or water year that holds a day: its first day and the one after its last.
std::pair<StationDay, StationDay> span_of(StationDay day, MeanOver mean, const StationClock& clock) {
  if (mean == MeanOver::month) return {month_start(day), next_month_start(day)};
  const int year = water_year(day, clock);
  return {water_year_start(year, clock), water_year_start(year + 1, clock)};
}

void add_once(std::vector<int>& all, const std::vector<int>& more) {
  for (const int item : more) {
    if (std::find(all.begin(), all.end(), item) == all.end()) all.push_back(item);
  }
}

/// Means of days gathered into one of a longer span.
class Gathering {
 public:
  Gathering(StationDay first, StationDay end) : first_(first), end_(end) {}
  [[nodiscard]] bool holds(StationDay day) const { return first_ <= day && day < end_; }

  void add(const DayValue& day) {
    if (!day.mean_m3s) return;
    share_ += day.share;
    volume_ += *day.mean_m3s * day.share;
    spread_ += *day.mean_m3s * day.sd_ln_q * day.share;
    flags_ |= day.flags;
    worst_ = worse(worst_, day.quality);
    add_once(curves_, day.curves);
  }

  [[nodiscard]] SeriesRow row(const StationClock& clock, double least_share, bool published) const {
    SeriesRow row;
    row.time = start_of(first_, clock);
    row.share = share_ / (end_.number - first_.number);
    row.curves = curves_;
    row.flags = bit(Flag::gap);
    if (share_ <= 0 || row.share < least_share) return row;
    row.discharge_m3s = volume_ / share_;
    row.u95_pct = rating::u95_pct(volume_ > 0 ? spread_ / volume_ : 0);
    row.flags = static_cast<Flags>(flags_ & ~bit(Flag::no_flow));
    if (volume_ == 0) row.flags |= bit(Flag::no_flow);
    row.quality = worse(published ? Quality::good : Quality::unchecked, worst_);
    if (row.share < 1) {
      row.flags |= bit(Flag::gap);
      row.quality = worse(row.quality, Quality::estimate);
    }
    return row;
  }

 private:
  StationDay first_, end_;
  double share_ = 0, volume_ = 0, spread_ = 0;
  Flags flags_ = 0;
  Quality worst_ = Quality::good;
  std::vector<int> curves_;
};

SeriesRow row_of(const DayValue& day, const StationClock& clock) {
  SeriesRow row;
  row.time = start_of(day.day, clock);
  row.discharge_m3s = day.mean_m3s;
  row.units = day.units;
  row.u95_pct = day.u95_pct;
  row.quality = day.quality;
  row.curves = day.curves;
  row.flags = day.flags;
  row.share = day.share;
  return row;
}

/// Hands days on, or gathers them into months and water years.
class DaySink {
 public:
  DaySink(MeanOver mean, const StationClock& clock, const store::Settings& settings, bool published,
          RowSink sink)
      : mean_(mean),
        clock_(clock),
        least_share_(settings.least_share_of_day),
        published_(published),
        sink_(std::move(sink)) {}

  void add(const DayValue& day) {
    if (mean_ == MeanOver::day) return sink_(row_of(day, clock_));
    if (!gathering_ || !gathering_->holds(day.day)) {
      finish();
      const auto [first, end] = span_of(day.day, mean_, clock_);
      gathering_.emplace(first, end);
    }
    gathering_->add(day);
  }
  void finish() {
    if (gathering_) sink_(gathering_->row(clock_, least_share_, published_));
    gathering_.reset();
  }

 private:
  MeanOver mean_;
  StationClock clock_;
  double least_share_;
  bool published_;
  RowSink sink_;
  std::optional<Gathering> gathering_;
};

/// Days of a request: for months and water years those of all that begin inside it.
std::pair<StationDay, StationDay> days_of(const SeriesRequest& request, const StationClock& clock) {
  auto [first, end] = days_in(request.from, request.until, clock);
  if (request.mean == MeanOver::day || end <= first) return {first, end};
  const auto begins_inside = [&](StationDay day) {
    const auto span = span_of(day, request.mean, clock);
    return span.first == day ? day : span.second;
  };
  return {begins_inside(first), begins_inside(end)};
}

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
                   const store::Settings& settings, const RowSink& sink) {
  DaySink days(request.mean, clock, settings, false, sink);
  const auto [first, end] = days_of(request, clock);
  replayer.day_means(first, end, [&](const replay::DayMean& mean) {
    days.add({mean.day, mean.mean_m3s, mean.sd_ln_q, mean.flags, mean.quality, mean.share, mean.curves, 0,
              mean.mean_m3s ? rating::u95_pct(mean.sd_ln_q) : 0});
  });
  days.finish();
}

/// Publications as known with their figures, the newest last.
std::vector<store::Publication> whole_publications(const store::Book& book, const SeriesRequest& request,
                                                   Instant from, Instant until) {
  std::vector<store::Publication> all;
  for (const auto& head : book.publications(request.station, request.known)) {
    if (head.until > from && head.from < until)
      all.push_back(*book.publication(request.station, head.number));
  }
  return all;
}

double scale_of(const store::Publication& publication) {
  double scale = 1;
  for (int i = 0; i < publication.decimals; ++i) scale *= 10;
  return scale;
}

bool is_covered_by_newer(const std::vector<store::Publication>& all, std::size_t of, Instant time) {
  for (std::size_t i = of + 1; i < all.size(); ++i) {
    if (all[i].from <= time && time < all[i].until) return true;
  }
  return false;
}

void published_instants(const std::vector<store::Publication>& all, const SeriesRequest& request,
                        const RowSink& sink) {
  std::map<Instant, SeriesRow> rows;
  for (std::size_t p = 0; p < all.size(); ++p) {
    const double scale = scale_of(all[p]);
    for (const auto& month : all[p].months) {
      for (std::size_t i = 0; i < month.time_ms.size(); ++i) {
        const Instant time = from_ms(month.time_ms[i]);
        if (time < request.from || time >= request.until || is_covered_by_newer(all, p, time)) continue;
        SeriesRow row;
        row.time = time;
        if (month.value[i]) {
          row.units = *month.value[i];
          row.discharge_m3s = static_cast<double>(row.units) / scale;
          row.u95_pct = static_cast<double>(month.u95_tenth_pct[i]) / 10;
          row.curves = {month.curve[i]};
        }
        row.quality = month.quality[i];
        row.flags = month.flags[i];
        rows.emplace(time, std::move(row));
      }
    }
  }
  for (const auto& [time, row] : rows) sink(row);
}

/// sd of ln Q that a published u95 stands for.
double sd_of(double u95_pct) {
  return std::log1p(u95_pct / 100) / 1.96;
}

void published_means(const std::vector<store::Publication>& all, const SeriesRequest& request,
                     const StationClock& clock, const store::Settings& settings, const RowSink& sink) {
  const auto [first, end] = days_of(request, clock);
  std::map<int, DayValue> days;
  for (const auto& publication : all) {
    const double scale = scale_of(publication);
    for (const auto& day : publication.days) {
      if (day.day < first.number || day.day >= end.number) continue;
      DayValue value{{day.day}, {}, 0, day.flags, day.quality, day.share, day.curves, 0, 0};
      if (day.mean) {
        value.units = *day.mean;
        value.mean_m3s = static_cast<double>(*day.mean) / scale;
        value.u95_pct = static_cast<double>(day.u95_tenth_pct.value_or(0)) / 10;
        value.sd_ln_q = sd_of(value.u95_pct);
      }
      days[day.day] = std::move(value);  // the newest publication comes last
    }
  }
  DaySink out(request.mean, clock, settings, true, sink);
  for (const auto& [number, day] : days) out.add(day);
  out.finish();
}

std::vector<std::string> surveys_of(const store::Book& book, const SeriesRequest& request) {
  std::vector<std::string> surveys;
  for (const auto& curve : book.curves(request.station)) {
    const auto at = static_cast<std::size_t>(curve.number);
    if (surveys.size() <= at) surveys.resize(at + 1);
    surveys[at] = curve.survey;
  }
  return surveys;
}

void run_published(const store::Book& book, const SeriesRequest& request, SeriesHead& head,
                   const store::Settings& settings, const std::function<void(const SeriesHead&)>& tell,
                   const RowSink& row) {
  // A month or water year may reach a year beyond what was asked for.
  const auto margin = std::chrono::hours(24 * 367);
  const auto all = whole_publications(book, request, request.from - margin, request.until + margin);
  for (const auto& publication : all) {
    if (publication.until > request.from && publication.from < request.until) {
      head.publications.push_back(publication.number);
      head.decimals = publication.decimals;
    }
  }
  if (head.publications.empty()) {
    throw store::StoreError(Kind::refused, "nothing of " + request.station + " was published for this range");
  }
  tell(head);
  if (request.mean == MeanOver::none) return published_instants(all, request, row);
  published_means(all, request, head.station.clock, settings, row);
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
  if (!station) throw store::StoreError(Kind::refused, "the book has no station " + request.station);
  const store::Settings settings = book.settings(request.known);
  SeriesHead head;
  head.station = station->value;
  head.request = request;
  head.known_act = std::min(request.known.act, book.newest_act());
  head.digits = settings.published_digits;
  head.decimals = static_cast<int>(settings.published_decimals);
  head.survey_of_curve = surveys_of(book, request);
  if (request.published) return run_published(book, request, head, settings, tell, row);

  const history::View view =
      history::view_of(book, request.station, request.known, request.edition, request.data_version);
  const replay::Replayer replayer(book, view);  // refuses a view without an edition
  head.edition = view.edition->number;
  head.data_version = view.data_version;
  tell(head);
  if (request.mean == MeanOver::none) return working_instants(replayer, request, row);
  working_means(replayer, request, head.station.clock, settings, row);
}

}  // namespace scourbook::publish
