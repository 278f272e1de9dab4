#include "publish/effect.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "publish/coverage.hpp"
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

/// Day means of a station, all in units of the same decimals.
class DayReader {
 public:
  DayReader(const store::Book& book, const history::View& before)
      : book_(book),
        before_(before),
        clock_(book.station(before.station, before.known)->value.clock),
        settings_(book.settings(before.known)),
        heads_(book.publications(before.station, before.known)),
        decimals_(settings_.published_decimals) {
    for (const auto& head : heads_) decimals_ = std::max<std::int64_t>(decimals_, head.decimals);
  }
  [[nodiscard]] const StationClock& clock() const { return clock_; }

  [[nodiscard]] Days computed(const history::View& view, StationDay from, StationDay until) const {
    const std::int64_t factor = power_of_ten(decimals_ - settings_.published_decimals);
    Days days;
    replay::Replayer(book_, view).day_means(from, until, [&](const replay::DayMean& mean) {
      if (mean.mean_m3s) days[mean.day.number] = {as_published(*mean.mean_m3s, settings_) * factor, 0};
    });
    return days;
  }

  /// What stands before: of the newest edition, over it what was published.
  [[nodiscard]] Days before(StationDay from, StationDay until) const {
    Days days;
    if (before_.edition) days = computed(before_, from, until);
    for (const auto& stretch : coverage(heads_, start_of(from, clock_), start_of(until, clock_))) {
      const auto publication = book_.publication(before_.station, stretch.publication).value();
      const std::int64_t factor = power_of_ten(decimals_ - publication.decimals);
      for (const auto& day : publication.days) {
        const Instant begin = start_of(StationDay{day.day}, clock_);
        if (begin < stretch.from || begin >= stretch.until) continue;
        days[day.day] = {day.mean ? std::optional(*day.mean * factor) : std::nullopt, publication.number};
      }
    }
    return days;
  }

 private:
  const store::Book& book_;
  const history::View& before_;
  StationClock clock_;
  store::Settings settings_;
  std::vector<store::Publication> heads_;
  std::int64_t decimals_;
};

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
    if (before_ > 0) effect_.volume_change_pct = 100 * (after_ - before_) / before_;
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
    const double percent = 100 * (after - before) / before;
    if (std::abs(percent) > 5) ++effect_.beyond_5_pct;
    if (std::abs(percent) > 10) ++effect_.beyond_10_pct;
    if (effect_.largest_change_pct && std::abs(percent) <= std::abs(*effect_.largest_change_pct)) return;
    effect_.largest_change_pct = percent;
    effect_.largest_on = {day};
  }

  StretchEffect effect_;
  double before_ = 0, after_ = 0;
};

/// The end of an adopted interval: as given, else where its period ends in the new edition.
Instant end_of(const history::Adoption& adoption, const std::vector<Period>& periods, Instant record_end) {
  if (adoption.period.until) return std::min(*adoption.period.until, record_end);
  const int at = history::period_at(periods, adoption.period.from);
  if (at < 0) return record_end;
  const auto& until = periods[static_cast<std::size_t>(at)].until;
  return until ? std::min(*until, record_end) : record_end;
}

/// Compares the days that a stretch touches and notes the publications that hold changed ones.
StretchEffect compare(StretchEffect stretch, const DayReader& reader, const history::View& after,
                      std::set<int>& publications) {
  Comparison comparison(stretch);
  if (stretch.from < stretch.until) {
    const StationDay first = day_of(stretch.from, reader.clock());
    const StationDay end{day_of(stretch.until - Millis(1), reader.clock()).number + 1};
    const Days was = reader.before(first, end);
    const Days is = reader.computed(after, first, end);
    for (int day = first.number; day < end.number; ++day) {
      const DayFigure& old = figure_at(was, day);
      const DayFigure& now = figure_at(is, day);
      comparison.add(day, old, now);
      if (old.publication > 0 && old.units != now.units) publications.insert(old.publication);
    }
  }
  return comparison.finish();
}

}  // namespace

Effect effect_of(const store::Book& book, const history::View& before, const std::vector<Period>& periods,
                 const std::vector<history::Adoption>& adopted) {
  const auto span = book.stage_span(before.station, Known{before.data_version});
  const DayReader reader(book, before);
  history::View after = before;
  after.edition = Edition{before.station, 0, {}, 0, periods};

  std::vector<history::Adoption> by_time = adopted;
  std::sort(by_time.begin(), by_time.end(),
            [](const auto& a, const auto& b) { return a.period.from < b.period.from; });
  Effect effect;
  std::set<int> publications;
  for (const auto& adoption : by_time) {
    StretchEffect stretch;
    stretch.curve = adoption.period.curve;
    stretch.from = stretch.until = adoption.period.from;
    if (span) {
      // Nothing changes outside the record.
      stretch.from = std::max(adoption.period.from, span->first);
      stretch.until = std::max(stretch.from, end_of(adoption, periods, span->second + Millis(1)));
    }
    effect.stretches.push_back(compare(stretch, reader, after, publications));
  }
  effect.publications.assign(publications.begin(), publications.end());
  return effect;
}

}  // namespace scourbook::publish
