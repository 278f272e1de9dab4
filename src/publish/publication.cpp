#include "publish/publication.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "publish/coverage.hpp"
#include "publish/rounding.hpp"
#include "replay/replay.hpp"

namespace scourbook::publish {
namespace {

/// What was only unchecked because it was not published.
Quality published_quality(Quality quality) {
  return quality == Quality::unchecked ? Quality::good : quality;
}

store::PublishedMonth month_of(const replay::FlowBlock& block, Instant from, Instant until,
                               const store::Settings& settings) {
  store::PublishedMonth month;
  month.month = block.month;
  for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
    if (block.time_ms[i] < to_ms(from) || block.time_ms[i] >= to_ms(until)) continue;
    const bool has_flow = !std::isnan(block.discharge_m3s[i]);
    month.time_ms.push_back(block.time_ms[i]);
    month.value.push_back(has_flow ? std::optional(as_published(block.discharge_m3s[i], settings))
                                   : std::nullopt);
    month.u95_tenth_pct.push_back(has_flow ? u95_tenth_pct(block.sd_ln_q[i]) : 0);
    month.flags.push_back(block.flags[i]);
    month.quality.push_back(published_quality(block.quality[i]));
    month.curve.push_back(block.curve[i]);
  }
  return month;
}

store::PublishedDay day_of_mean(const replay::DayMean& mean, const store::Settings& settings) {
  store::PublishedDay day;
  day.day = mean.day.number;
  if (mean.mean_m3s) {
    day.mean = as_published(*mean.mean_m3s, settings);
    day.u95_tenth_pct = u95_tenth_pct(mean.sd_ln_q);
  }
  day.flags = mean.flags;
  day.quality = published_quality(mean.quality);
  day.share = mean.share;
  day.curves = mean.curves;
  return day;
}

[[noreturn]] void differs(const store::ReplayRecord& replay, const std::string& what) {
  throw store::StoreError(
      store::StoreError::Kind::damaged,
      fmt::format("replay {} of {}: computing {} again does not give the flows that were kept", replay.number,
                  replay.station, what));
}

void require_digest(const store::ReplayRecord& replay, const replay::FlowBlock& block) {
  const auto same = [&](const store::ReplayMonth& month) { return month.month == block.month; };
  const auto kept = std::find_if(replay.months.begin(), replay.months.end(), same);
  const bool equal = kept != replay.months.end() && kept->sha256 == digest(block);
  if (!equal) differs(replay, format_month(block.month));
}

/// No month that was kept has gone.
void require_months(const store::ReplayRecord& replay, std::int64_t found) {
  const auto kept = static_cast<std::int64_t>(replay.months.size());
  if (found != kept) differs(replay, fmt::format("its {} months ({} have readings)", kept, found));
}

/// The first station day that begins at or after `time`.
StationDay whole_day_from(Instant time, const StationClock& clock) {
  const StationDay day = day_of(time, clock);
  return start_of(day, clock) == time ? day : StationDay{day.number + 1};
}

}  // namespace

store::Publication make_publication(const store::Book& book, const store::ReplayRecord& replay,
                                    const std::function<void(std::int64_t, std::int64_t)>& progress,
                                    Known known) {
  const history::View view =
      history::view_of(book, replay.station, known, replay.edition, replay.data_version);
  const StationClock clock = book.station(replay.station, known)->value.clock;
  const store::Settings settings = book.settings(known);
  const StationDay first = whole_day_from(replay.from, clock), end = day_of(replay.until, clock);
  if (end <= first) {
    throw store::StoreError(
        store::StoreError::Kind::refused,
        fmt::format("replay {} of {} holds no whole station day", replay.number, replay.station));
  }
  store::Publication publication;
  publication.station = replay.station;
  publication.replay = replay.number;
  publication.from = start_of(first, clock);
  publication.until = start_of(end, clock);
  publication.decimals = static_cast<int>(settings.published_decimals);

  const replay::Replayer replayer(book, view);
  const auto all = static_cast<std::int64_t>(replay.months.size());
  std::int64_t done = 0;
  const Instant begin = start_of(utc_month_of(replay.from));
  const Instant last = start_of(UtcMonth{utc_month_of(replay.until - Millis(1)).number + 1});
  replayer.run(begin, last, [&](const replay::FlowBlock& block) {
    require_digest(replay, block);
    auto month = month_of(block, publication.from, publication.until, settings);
    if (!month.time_ms.empty()) publication.months.push_back(std::move(month));
    ++done;
    if (progress) progress(done, 2 * all);
  });
  require_months(replay, done);
  replayer.day_means(first, end, [&](const replay::DayMean& mean) {
    publication.days.push_back(day_of_mean(mean, settings));
    const std::int64_t days = mean.day.number - first.number + 1;
    if (progress) progress(all + all * days / (end.number - first.number), 2 * all);
  });
  return publication;
}

std::optional<int> publication_at(const store::Book& book, const std::string& station, Instant time,
                                  Known known) {
  const auto covered = coverage(book.publications(station, known), time, time + Millis(1));
  if (covered.empty()) return {};
  return covered.front().publication;
}

PublicationState state_of(const store::Publication& publication, const std::vector<store::Publication>& all) {
  const auto covered = coverage(all, publication.from, publication.until);
  const bool speaks = std::any_of(covered.begin(), covered.end(), [&](const Coverage& stretch) {
    return stretch.publication == publication.number;
  });
  return speaks ? PublicationState::published : PublicationState::superseded;
}

}  // namespace scourbook::publish
