#include "history/adopt.hpp"

#include <catch2/catch.hpp>
#include <random>
#include <set>

using namespace scourbook;
using history::adopt;
using history::Adoption;
using history::AdoptResult;

namespace {

constexpr std::int64_t kHourMs = 3'600'000;

Instant hour(int number) {
  return from_ms(number * kHourMs);
}
int hour_of(Instant time) {
  return static_cast<int>(to_ms(time) / kHourMs);
}

Period given(int curve, int from, std::optional<int> until = {}, int blend = 0) {
  Period period;
  period.from = hour(from);
  if (until) period.until = hour(*until);
  period.curve = curve;
  period.blend = Millis(blend * kHourMs);
  return period;
}
Period none(NoCurve reason, int from, std::optional<int> until = {}) {
  Period period = given(0, from, until);
  period.curve.reset();
  period.none = reason;
  return period;
}

std::string text(const std::vector<std::string>& lines) {
  std::string joined;
  for (const std::string& line : lines) joined += line + "\n";
  return joined;
}

// ---- a naive time line: every hour is marked
// ------------------------------------------------------------------

constexpr int kHours = 60;  // what lies at the last hour stands for all that follows

struct Hour {
  int holder = 0;  // a curve; 0 gap; -1, -2 ... none with a reason
  int start = 0;   // of the period that holds it
  int blend = 0;
  friend bool operator==(const Hour&, const Hour&) = default;
};
using Line = std::vector<Hour>;

int holder_of(const Period& period) {
  return period.curve ? *period.curve : -1 - static_cast<int>(period.none);
}

Line line_of(const std::vector<Period>& periods) {
  Line line(kHours);
  for (const Period& period : periods) {
    const int end = period.until ? hour_of(*period.until) : kHours;
    for (int t = hour_of(period.from); t < end; ++t) {
      line.at(t) = {holder_of(period), hour_of(period.from),
                    static_cast<int>(period.blend.count() / kHourMs)};
    }
  }
  return line;
}

/// What decides the flow of an hour: its curve, and inside a blend the curve passed from and the weight.
struct Says {
  int holder = 0;
  int outgoing = 0;
  double weight = 1;
  friend bool operator==(const Says&, const Says&) = default;
};
std::vector<Says> says(const Line& line) {
  std::vector<Says> all;
  for (int t = 0; t < kHours; ++t) {
    const Hour& now = line[t];
    Says say{now.holder, 0, 1};
    const int out = now.start > 0 ? line[now.start - 1].holder : 0;
    if (now.holder > 0 && t - now.start < now.blend && out > 0 && out != now.holder) {
      say.outgoing = out;
      say.weight = double(t - now.start) / now.blend;
    }
    all.push_back(say);
  }
  return all;
}

struct Interval {
  int holder, from, until, blend;
};

/// Ends by the rule of the command, written once more.
std::vector<Interval> intervals_of(const std::vector<Period>& before,
                                   const std::vector<Adoption>& adoptions) {
  std::vector<Interval> all;
  for (const Adoption& adoption : adoptions) {
    const int from = hour_of(adoption.period.from);
    int until = kHours;
    if (adoption.period.until) {
      until = hour_of(*adoption.period.until);
    } else if (!adoption.ends_open) {
      std::set<int> starts{kHours};
      for (const Period& period : before) starts.insert(hour_of(period.from));
      for (const Adoption& other : adoptions) starts.insert(hour_of(other.period.from));
      until = *starts.upper_bound(from);
    }
    all.push_back(
        {holder_of(adoption.period), from, until, static_cast<int>(adoption.period.blend.count() / kHourMs)});
  }
  return all;
}

/// Marks the hours of every interval; nothing where an hour would be marked twice or an interval holds none.
std::optional<Line> mark(Line line, const std::vector<Interval>& intervals) {
  std::set<int> marked;
  for (const Interval& interval : intervals) {
    if (interval.until <= interval.from) return {};
    // What follows in the same period begins anew, without a blend.
    for (int t = interval.until; t < kHours; ++t) {
      if (line[t].holder != 0 && line[t].start < interval.until)
        line[t] = {line[t].holder, interval.until, 0};
    }
    for (int t = interval.from; t < interval.until; ++t) {
      if (!marked.insert(t).second) return {};
      line[t] = {interval.holder, interval.from, interval.blend};
    }
  }
  return line;
}

bool blends_allowed(const Line& after, const std::vector<Interval>& intervals) {
  for (const Interval& interval : intervals) {
    if (interval.blend == 0) continue;
    if (interval.until < kHours && interval.until - interval.from < interval.blend) return false;
    const int out = interval.from > 0 ? after[interval.from - 1].holder : 0;
    if (interval.holder <= 0 || out <= 0 || out == interval.holder) return false;
  }
  return true;
}

bool loses_whole_period(const std::vector<Period>& before, const Line& after) {
  for (const Period& period : before) {
    const int end = period.until ? hour_of(*period.until) : kHours;
    bool kept = false;
    for (int t = hour_of(period.from); t < end; ++t) kept = kept || after[t].holder == holder_of(period);
    if (!kept) return true;
  }
  return false;
}

class Dice {
 public:
  explicit Dice(unsigned seed) : engine_(seed) {}
  int up_to(int n) { return std::uniform_int_distribution<int>(0, n)(engine_); }
  bool one_in(int n) { return up_to(n - 1) == 0; }

 private:
  std::mt19937 engine_;
};

Adoption random_adoption(Dice& dice) {
  const int from = dice.up_to(kHours - 2);
  Adoption adoption;
  adoption.period =
      dice.one_in(6) ? none(static_cast<NoCurve>(dice.up_to(1)), from) : given(1 + dice.up_to(4), from);
  if (!dice.one_in(3)) {
    adoption.period.until = hour(std::min(kHours - 1, from + dice.up_to(20)));
  } else {
    adoption.ends_open = dice.one_in(3);
  }
  if (dice.one_in(3)) adoption.period.blend = Millis((1 + dice.up_to(5)) * kHourMs);
  return adoption;
}

}  // namespace

TEST_CASE("random adoptions agree with a time line on which every hour is marked") {
  int adopted = 0;
  int refused = 0;
  for (unsigned seed = 1; seed <= 400; ++seed) {
    INFO("seed " << seed);
    Dice dice(seed);
    std::vector<Period> edition;
    for (int step = 0; step < 25; ++step) {
      INFO("step " << step);
      std::vector<Adoption> adoptions;
      for (int i = dice.up_to(2); i >= 0; --i) adoptions.push_back(random_adoption(dice));
      const bool replace = dice.one_in(2);
      const AdoptResult result = adopt(edition, adoptions, replace);

      const auto intervals = intervals_of(edition, adoptions);
      const auto expected = mark(line_of(edition), intervals);
      const bool allowed = expected && blends_allowed(*expected, intervals) &&
                           (replace || !loses_whole_period(edition, *expected));
      INFO(text(result.refusals));
      REQUIRE(result.refusals.empty() == allowed);
      if (!allowed) {
        ++refused;
        continue;
      }
      ++adopted;
      const Line after = line_of(result.periods);
      REQUIRE(says(after) == says(*expected));

      // What is listed as removed is exactly what no longer has its curve.
      const Line before = line_of(edition);
      std::set<int> lost;
      for (int t = 0; t < kHours; ++t) {
        if (before[t].holder != 0 && before[t].holder != after[t].holder) lost.insert(t);
      }
      std::set<int> listed;
      for (const auto& removed : result.removed) {
        const int end = removed.part.until ? hour_of(*removed.part.until) : kHours;
        for (int t = hour_of(removed.part.from); t < end; ++t) {
          REQUIRE(before[t].holder == holder_of(removed.part));
          REQUIRE(listed.insert(t).second);
        }
      }
      REQUIRE(listed == lost);

      // Well formed: by time, disjoint, nothing that could be one period left as two.
      for (std::size_t i = 0; i < result.periods.size(); ++i) {
        const Period& period = result.periods[i];
        REQUIRE((!period.until || *period.until > period.from));
        if (i == 0) continue;
        const Period& last = result.periods[i - 1];
        REQUIRE(last.until);
        REQUIRE(*last.until <= period.from);
        const bool cut_in_blend = last.blend > *last.until - last.from;
        REQUIRE_FALSE((*last.until == period.from && holder_of(last) == holder_of(period) && !cut_in_blend));
      }
      // The period in force, hour by hour.
      for (int t = 0; t < kHours; ++t) {
        const int at = history::period_at(result.periods, hour(t));
        REQUIRE((at < 0 ? 0 : holder_of(result.periods.at(at))) == after[t].holder);
      }
      edition = result.periods;
    }
  }
  CHECK(adopted > 1000);
  CHECK(refused > 1000);
}

TEST_CASE("a first edition: several intervals without an end follow one another") {
  const auto result = adopt({}, {{given(3, 30)}, {given(1, 0)}, {given(2, 10)}}, false);
  CHECK(result.refusals.empty());
  CHECK(result.removed.empty());
  CHECK(result.periods == std::vector<Period>{given(1, 0, 10), given(2, 10, 30), given(3, 30)});
}

TEST_CASE("an interval without an end stops where the next period begins; open replaces what follows") {
  const std::vector<Period> before{given(1, 0, 10), given(2, 10)};
  CHECK(adopt(before, {{given(3, 4)}}, false).periods ==
        std::vector<Period>{given(1, 0, 4), given(3, 4, 10), given(2, 10)});
  const auto open = adopt(before, {{given(3, 4), true}}, false);
  CHECK(open.refusals ==
        std::vector<std::string>{"curve 2 would lose its whole period, 1970-01-01T10:00:00Z on; "
                                 "--replace allows it"});
  const auto allowed = adopt(before, {{given(3, 4), true}}, true);
  CHECK(allowed.refusals.empty());
  CHECK(allowed.periods == std::vector<Period>{given(1, 0, 4), given(3, 4)});
  REQUIRE(allowed.removed.size() == 2);
  CHECK(allowed.removed[0].part == given(1, 4, 10));
  CHECK_FALSE(allowed.removed[0].whole);
  CHECK(allowed.removed[1].part == given(2, 10));
  CHECK(allowed.removed[1].whole);
}

TEST_CASE("a period cut in the middle keeps both sides") {
  const auto result = adopt({given(1, 0)}, {{none(NoCurve::ice, 5, 7)}}, false);
  CHECK(result.periods == std::vector<Period>{given(1, 0, 5), none(NoCurve::ice, 5, 7), given(1, 7)});
}

TEST_CASE("a cut keeps the blend on its left and says what becomes of the rest") {
  const std::vector<Period> before{given(1, 0, 10), given(2, 10, {}, 6)};
  const auto inside = adopt(before, {{given(3, 12, 14)}}, false, UtcOffset{std::chrono::minutes(60)});
  CHECK(inside.periods ==
        std::vector<Period>{given(1, 0, 10), given(2, 10, 12, 6), given(3, 12, 14), given(2, 14)});
  CHECK(inside.notes ==
        std::vector<std::string>{"the rest of the blend of curve 2 at 1970-01-01T11:00:00+01:00 is "
                                 "dropped: the interval ends inside it"});
  const auto other = adopt(before, {{given(3, 5, 10)}}, false);
  CHECK(other.notes ==
        std::vector<std::string>{
            "the blend of curve 2 at 1970-01-01T10:00:00Z now passes from curve 3 instead of curve 1"});
  const auto closed = adopt(before, {{none(NoCurve::works, 5, 10)}}, false);
  CHECK(closed.periods.back() == given(2, 10));
  CHECK(closed.notes ==
        std::vector<std::string>{"the blend of curve 2 at 1970-01-01T10:00:00Z is dropped: no other "
                                 "curve stands just before it any more"});
  // The same curve on both sides of a cut made inside its blend stays two periods: the right one is plain.
  const auto again = adopt(before, {{given(2, 12, 14)}}, false);
  CHECK(again.periods == std::vector<Period>{given(1, 0, 10), given(2, 10, 12, 6), given(2, 12)});
}

TEST_CASE("the refusals say which interval and why") {
  const std::vector<Period> before{given(1, 0, 10)};
  CHECK(adopt(before, {}, false).refusals == std::vector<std::string>{"no interval is given"});
  CHECK(
      adopt(before, {{given(2, 8, 8)}}, false).refusals ==
      std::vector<std::string>{
          "the interval of curve 2 ends at 1970-01-01T08:00:00Z, not after its begin 1970-01-01T08:00:00Z"});
  CHECK(adopt(before, {{given(2, 4, 8)}, {none(NoCurve::ice, 6, 9)}}, false).refusals ==
        std::vector<std::string>{
            "the intervals of curve 2 (1970-01-01T04:00:00Z to 1970-01-01T08:00:00Z) and none "
            "(ice) (1970-01-01T06:00:00Z to 1970-01-01T09:00:00Z) overlap"});
  CHECK(adopt(before, {{given(2, 4, 8, 5)}}, false).refusals ==
        std::vector<std::string>{"the blend of curve 2 at 1970-01-01T04:00:00Z is longer than its period"});
  CHECK(adopt(before, {{given(2, 12, 20, 5)}}, false).refusals ==
        std::vector<std::string>{
            "the blend of curve 2 at 1970-01-01T12:00:00Z has no other curve just before it to pass from"});
  CHECK(adopt(before, {{given(2, 4, 8, -1)}}, false).refusals ==
        std::vector<std::string>{"the blend of curve 2 at 1970-01-01T04:00:00Z is negative"});
}

TEST_CASE("the period in force: a boundary belongs to the later period, a gap to none") {
  const std::vector<Period> periods{given(1, 2, 5), given(2, 5, 8), given(3, 10)};
  CHECK(history::period_at(periods, hour(2) - Millis{1}) == -1);
  CHECK(history::period_at(periods, hour(2)) == 0);
  CHECK(history::period_at(periods, hour(5) - Millis{1}) == 0);
  CHECK(history::period_at(periods, hour(5)) == 1);
  CHECK(history::period_at(periods, hour(8)) == -1);
  CHECK(history::period_at(periods, hour(1000)) == 2);
  CHECK(history::period_at({}, hour(1)) == -1);
}
