#include "cli/touched.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

#include <algorithm>
#include <optional>
#include <set>

#include "history/state.hpp"

namespace scourbook::cli {
namespace {

struct Range {
  Instant from{};
  std::optional<Instant> until;
};

/// Ranges in which levels moved: from each gauge zero of this act to the next one, and stage corrections.
std::vector<Range> moved_levels(const store::Book& book, const std::string& station, std::int64_t act) {
  std::vector<Range> ranges;
  const auto zeros = book.gauge_zeros(station);
  for (std::size_t i = 0; i < zeros.size(); ++i) {
    if (zeros[i].act != act) continue;
    const bool last = i + 1 == zeros.size();
    ranges.push_back(
        {zeros[i].value.valid_from, last ? std::nullopt : std::optional(zeros[i + 1].value.valid_from)});
  }
  for (const auto& correction : book.stage_corrections(station)) {
    if (correction.act == act) ranges.push_back({correction.value.from, correction.value.until});
  }
  return ranges;
}

bool overlaps(const Period& period, const Range& range) {
  const bool begins_in_time = !range.until || period.from < *range.until;
  return begins_in_time && (!period.until || range.from < *period.until);
}

std::string range_text(const Range& range, UtcOffset offset) {
  return fmt::format("from {}{}", format_time(range.from, offset),
                     range.until ? " until " + format_time(*range.until, offset) : std::string(" on"));
}

void tell_levels(const store::Book& book, const Station& station, std::int64_t act,
                 std::vector<std::string>& out) {
  const auto edition = book.newest_edition(station.id);
  if (!edition) return;
  for (const Range& range : moved_levels(book, station.id, act)) {
    std::set<int> curves;
    for (const Period& period : edition->periods) {
      if (period.curve && overlaps(period, range)) curves.insert(*period.curve);
    }
    if (curves.empty()) continue;
    out.push_back(fmt::format("{}: levels, and with them flows, move {}; curves in force there: {}",
                              station.id, range_text(range, station.clock.offset), fmt::join(curves, ", ")));
  }
}

void tell_out_of_date(const store::Book& book, const std::string& station, std::int64_t act,
                      std::vector<std::string>& out) {
  for (const auto& curve : book.curves(station)) {
    const auto before = history::out_of_date(book, curve, Known{act - 1});
    for (const auto& reason : history::out_of_date(book, curve)) {
      if (std::find(before.begin(), before.end(), reason) != before.end()) continue;
      out.push_back(fmt::format("{}: curve {} is out of date: {}; flows go on until it is derived again",
                                station, curve.number, reason));
    }
  }
}

}  // namespace

std::vector<std::string> touched_by(const store::Book& book, const fieldfile::Taken& taken) {
  std::vector<std::string> out;
  if (taken.act == 0) return out;
  std::set<std::string> stations;
  for (const auto& file : taken.files) stations.insert(file.stations.begin(), file.stations.end());
  for (const auto& id : stations) {
    const auto station = book.station(id);
    if (!station) continue;
    tell_levels(book, station->value, taken.act, out);
    tell_out_of_date(book, id, taken.act, out);
  }
  return out;
}

}  // namespace scourbook::cli
