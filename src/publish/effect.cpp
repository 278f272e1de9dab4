#include "publish/effect.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include "publish/rounding.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

/// A day's figure as published, or as it would be.
struct DayFigure {
  std::optional<std::int64_t> units;
  int publication = 0;  ///< 0: not published
};
using Days = std::map<int, DayFigure>;

Days computed_days(const store::Book& book, const history::View& view, StationDay from, StationDay until,
                   const store::Settings& settings) {
  Days days;
  replay::Replayer(book, view).day_means(from, until, [&](const replay::DayMean& mean) {
    if (mean.mean_m3s) days[mean.day.number] = {as_published(*mean.mean_m3s, settings), 0};
  });
  return days;
}

/// What stands before: of the newest edition, over it what was published.
Days days_before(const store::Book& book, const history::View& view, StationDay from, StationDay until,
                 const store::Settings& settings) {
  Days days;
  if (view.edition) days = computed_days(book, view, from, until, settings);
  for (const auto& head : book.publications(view.station, view.known)) {
    const auto publication = book.publication(view.station, head.number);
    for (const auto& day : publication->days) {
      if (from.number <= day.day && day.day < until.number) days[day.day] = {day.mean, head.number};
    }
  }
  return days;
}

const DayFigure& figure_at(const Days& days, int day) {
  static const DayFigure none;
  const auto found = days.find(day);
  return found == days.end() ? none : found->second;
}

/// One stretch, day by day.
class Comparison {
 public:
  explicit Comparison(StretchEffect effect) : effect_(std::move(effect)) {}

  void add(int day, const DayFigure& before, const DayFigure& after) {
    if (!before.units && !after.units) return;
    ++effect_.days;
    if (before.publication > 0) ++effect_.published_days;
    if (before.units == after.units) {
      volumes(*before.units, *after.units);
      return;
    }
    ++effect_.changed_days;
    if (!before.units) ++effect_.appeared;
    if (!after.units) ++effect_.disappeared;
    if (!before.units || !after.units) return;
    volumes(*before.units, *after.units);
    change(day, static_cast<double>(*before.units), static_cast<double>(*after.units));
  }

  [[nodiscard]] StretchEffect finish() {
    if (before_ > 0) effect_.volume_change_pct = 100 * (after_ / before_ - 1);
    return effect_;
  }

 private:
  void volumes(std::int64_t before, std::int64_t after) {
    before_ += static_cast<double>(before);
    after_ += static_cast<double>(after);
  }

  void change(int day, double before, double after) {
    if (!(before > 0)) {
      ++effect_.beyond_5_pct;
      ++effect_.beyond_10_pct;
      return;
    }
    const double percent = 100 * (after / before - 1);
    if (std::abs(percent) > 5) ++effect_.beyond_5_pct;
    if (std::abs(percent) > 10) ++effect_.beyond_10_pct;
    if (effect_.largest_change_pct && std::abs(percent) <= std::abs(*effect_.largest_change_pct)) return;
    effect_.largest_change_pct = percent;
    effect_.largest_on = {day};
  }

  StretchEffect effect_;
  double before_ = 0, after_ = 0;
};

StationDay first_day_from(Instant time, const StationClock& clock) {
  const StationDay day = day_of(time, clock);
  return start_of(day, clock) >= time ? day : StationDay{day.number + 1};
}

/// The end of an adopted interval: where its period ends in the new edition.
Instant end_of(const history::Adoption& adoption, const std::vector<Period>& periods, Instant record_end) {
  const int at = history::period_at(periods, adoption.period.from);
  if (at < 0) return record_end;
  const auto& until = periods[static_cast<std::size_t>(at)].until;
  return until ? std::min(*until, record_end) : record_end;
}

}  // namespace

Effect effect_of(const store::Book& book, const history::View& before, const std::vector<Period>& periods,
                 const std::vector<history::Adoption>& adopted) {
  Effect effect;
  const auto span = book.stage_span(before.station, Known{before.data_version});
  if (!span) return effect;
  const StationClock clock = book.station(before.station, before.known)->value.clock;
  const store::Settings settings = book.settings(before.known);
  history::View after = before;
  after.edition = Edition{before.station, 0, {}, 0, periods};

  std::vector<history::Adoption> by_time = adopted;
  std::sort(by_time.begin(), by_time.end(),
            [](const auto& a, const auto& b) { return a.period.from < b.period.from; });
  for (const auto& adoption : by_time) {
    StretchEffect stretch;
    stretch.from = std::max(adoption.period.from, span->first);
    stretch.until = end_of(adoption, periods, span->second);
    stretch.curve = adoption.period.curve;
    // The day in which the period begins changes too.
    const StationDay first = day_of(stretch.from, clock), end = first_day_from(stretch.until, clock);
    Comparison comparison(stretch);
    if (first < end && stretch.from < stretch.until) {
      const Days was = days_before(book, before, first, end, settings);
      const Days is = computed_days(book, after, first, end, settings);
      for (int day = first.number; day < end.number; ++day) {
        const DayFigure& old = figure_at(was, day);
        const DayFigure& now = figure_at(is, day);
        comparison.add(day, old, now);
        const bool touched = old.publication > 0 && old.units != now.units;
        const auto& known = effect.publications;
        if (touched && std::find(known.begin(), known.end(), old.publication) == known.end()) {
          effect.publications.push_back(old.publication);
        }
      }
    }
    effect.stretches.push_back(comparison.finish());
  }
  std::sort(effect.publications.begin(), effect.publications.end());
  return effect;
}

}  // namespace scourbook::publish
