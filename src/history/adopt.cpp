#include "history/adopt.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace scourbook::history {
namespace {

constexpr Instant kNever = Instant::max();  // the end of an open period

Instant end_of(const Period& period) {
  return period.until.value_or(kNever);
}

bool same_holder(const Period& a, const Period& b) {
  return a.curve == b.curve && (a.curve || a.none == b.none);
}

std::string span_text(const Period& period, UtcOffset shown) {
  const std::string from = format_time(period.from, shown);
  return period.until ? fmt::format("{} to {}", from, format_time(*period.until, shown)) : from + " on";
}

bool by_start(const Period& a, const Period& b) {
  return a.from < b.from;
}

/// The end that an adoption without `until` gets.
std::optional<Instant> implied_end(const Period& wanted, const std::vector<Period>& before,
                                   const std::vector<Adoption>& adoptions) {
  Instant end = kNever;
  for (const Period& period : before) {
    if (period.from > wanted.from) end = std::min(end, period.from);
  }
  for (const Adoption& other : adoptions) {
    if (other.period.from > wanted.from) end = std::min(end, other.period.from);
  }
  if (end == kNever) return {};
  return end;
}

/// The intervals with their ends, by time.
std::vector<Period> resolve(const std::vector<Period>& before, const std::vector<Adoption>& adoptions) {
  std::vector<Period> wanted;
  for (const Adoption& adoption : adoptions) {
    Period period = adoption.period;
    if (!period.until && !adoption.ends_open) period.until = implied_end(period, before, adoptions);
    wanted.push_back(period);
  }
  std::stable_sort(wanted.begin(), wanted.end(), by_start);
  return wanted;
}

void check_intervals(const std::vector<Period>& wanted, UtcOffset shown, std::vector<std::string>& refusals) {
  if (wanted.empty()) refusals.emplace_back("no interval is given");
  for (std::size_t i = 0; i < wanted.size(); ++i) {
    const Period& period = wanted[i];
    if (end_of(period) <= period.from) {
      refusals.push_back(fmt::format("the interval of {} ends at {}, not after its begin {}",
                                     describe_holder(period), format_time(*period.until, shown),
                                     format_time(period.from, shown)));
    }
    for (std::size_t j = i + 1; j < wanted.size(); ++j) {
      if (wanted[j].from >= end_of(period)) continue;
      refusals.push_back(fmt::format("the intervals of {} ({}) and {} ({}) overlap", describe_holder(period),
                                     span_text(period, shown), describe_holder(wanted[j]),
                                     span_text(wanted[j], shown)));
    }
  }
}

/// What is left of `period` outside the intervals (by time, disjoint).
std::vector<Period> outside(const Period& period, const std::vector<Period>& intervals) {
  std::vector<Period> left;
  Period rest = period;
  for (const Period& interval : intervals) {
    if (end_of(interval) <= rest.from || interval.from >= end_of(rest)) continue;
    if (interval.from > rest.from) {
      Period side = rest;
      side.until = interval.from;
      left.push_back(side);
    }
    if (end_of(interval) >= end_of(rest)) return left;
    rest.from = *interval.until;
    rest.blend = Millis{0};  // its passage began at a start that is gone
  }
  left.push_back(rest);
  return left;
}

const Period* just_before(const std::vector<Period>& periods, Instant time) {
  for (const Period& period : periods) {
    if (period.until == time) return &period;
  }
  return nullptr;
}

/// A blend needs another curve that ends where it begins.
bool has_passage(const std::vector<Period>& periods, const Period& period) {
  const Period* out = just_before(periods, period.from);
  return period.curve && out != nullptr && out->curve && out->curve != period.curve;
}

void check_blend(const std::vector<Period>& periods, const Period& period, UtcOffset shown,
                 std::vector<std::string>& refusals) {
  if (period.blend == Millis{0}) return;
  const std::string where =
      fmt::format("the blend of {} at {}", describe_holder(period), format_time(period.from, shown));
  if (period.blend < Millis{0}) {
    refusals.push_back(where + " is negative");
  } else if (period.until && *period.until - period.from < period.blend) {
    refusals.push_back(where + " is longer than its period");
  } else if (!has_passage(periods, period)) {
    refusals.push_back(where + " has no other curve just before it to pass from");
  }
}

/// Drops blends of the edition before that lost the curve they came from; says where a blend comes from
/// another one now.
void settle_old_blend(const std::vector<Period>& before, std::vector<Period>& periods, std::size_t at,
                      UtcOffset shown, std::vector<std::string>& notes) {
  Period& period = periods[at];
  if (period.blend == Millis{0}) return;
  const std::string where =
      fmt::format("the blend of {} at {}", describe_holder(period), format_time(period.from, shown));
  if (!has_passage(periods, period)) {
    notes.push_back(where + " is dropped: no other curve stands just before it any more");
    period.blend = Millis{0};
    return;
  }
  const Period* out = just_before(periods, period.from);
  const Period* old = just_before(before, period.from);
  if (old == nullptr || same_holder(*old, *out)) return;
  notes.push_back(fmt::format("{} now passes from {} instead of {}", where, describe_holder(*out),
                              describe_holder(*old)));
}

void note_cut_blends(const std::vector<Period>& before, const std::vector<Period>& wanted, UtcOffset shown,
                     std::vector<std::string>& notes) {
  for (const Period& period : before) {
    for (const Period& interval : wanted) {
      if (!interval.until || *interval.until <= period.from) continue;
      if (*interval.until >= std::min(period.from + period.blend, end_of(period))) continue;
      notes.push_back(fmt::format("the rest of the blend of {} at {} is dropped: the interval ends inside it",
                                  describe_holder(period), format_time(period.from, shown)));
    }
  }
}

/// A period cut inside its blend cannot take in what follows: its blend would go on there.
bool is_cut_in_blend(const Period& period) {
  return period.blend > Millis{0} && end_of(period) < period.from + period.blend;
}

std::vector<Period> merged(const std::vector<Period>& periods) {
  std::vector<Period> result;
  for (const Period& period : periods) {
    const bool joins = !result.empty() && result.back().until == period.from && period.blend == Millis{0} &&
                       same_holder(result.back(), period) && !is_cut_in_blend(result.back());
    if (joins) {
      result.back().until = period.until;
    } else {
      result.push_back(period);
    }
  }
  return result;
}

std::vector<Removed> removed_parts(const std::vector<Period>& before, const std::vector<Period>& after) {
  std::vector<Removed> removed;
  for (const Period& period : before) {
    std::vector<Period> kept;
    std::copy_if(after.begin(), after.end(), std::back_inserter(kept),
                 [&](const Period& other) { return same_holder(period, other); });
    for (const Period& part : outside(period, kept)) {
      removed.push_back({part, part.from == period.from && part.until == period.until});
    }
  }
  return removed;
}

}  // namespace

AdoptResult adopt(const std::vector<Period>& before, const std::vector<Adoption>& adoptions, bool replace,
                  UtcOffset shown) {
  AdoptResult result;
  const std::vector<Period> wanted = resolve(before, adoptions);
  check_intervals(wanted, shown, result.refusals);
  if (!result.refusals.empty()) return result;

  std::vector<Period> periods;
  for (const Period& period : before) {
    for (const Period& side : outside(period, wanted)) periods.push_back(side);
  }
  periods.insert(periods.end(), wanted.begin(), wanted.end());
  std::sort(periods.begin(), periods.end(), by_start);

  for (const Period& period : wanted) check_blend(periods, period, shown, result.refusals);
  note_cut_blends(before, wanted, shown, result.notes);
  for (std::size_t i = 0; i < periods.size(); ++i) {
    const bool is_new = std::any_of(wanted.begin(), wanted.end(),
                                    [&](const Period& other) { return other.from == periods[i].from; });
    if (!is_new) settle_old_blend(before, periods, i, shown, result.notes);
  }
  result.periods = merged(periods);
  result.removed = removed_parts(before, result.periods);
  for (const Removed& removed : result.removed) {
    if (replace || !removed.whole) continue;
    result.refusals.push_back(fmt::format("{} would lose its whole period, {}; --replace allows it",
                                          describe_holder(removed.part), span_text(removed.part, shown)));
  }
  return result;
}

int period_at(const std::vector<Period>& periods, Instant time) {
  const auto after = std::upper_bound(periods.begin(), periods.end(), time,
                                      [](Instant t, const Period& period) { return t < period.from; });
  if (after == periods.begin() || end_of(*(after - 1)) <= time) return -1;
  return static_cast<int>(after - periods.begin()) - 1;
}

std::string describe_holder(const Period& period) {
  return period.curve ? fmt::format("curve {}", *period.curve) : fmt::format("none ({})", word(period.none));
}

}  // namespace scourbook::history
