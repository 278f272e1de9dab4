// Stage as recorded: the true level above the gauge zero, with waves and sensor noise, a stretch of drift,
// and gaps.

#include "arithmetic.hpp"
#include "field.hpp"

namespace scenario {
namespace {

struct Span {
  Seconds from, until;
  [[nodiscard]] bool holds(Seconds time) const { return time >= from && time < until; }
};

bool in_any(const std::vector<Span>& spans, Seconds time) {
  for (const Span& span : spans) {
    if (span.holds(time)) return true;
  }
  return false;
}

/// One sd: 1.5 mm and 1 mm for each metre that the water stands above cease-to-flow (waves).
double noise(const Site& site, std::size_t step, Random& random) {
  const double above = site.level_m[step] - site.states.front().curve.cease_to_flow_m();
  return (0.0015 + 0.001 * (above > 0 ? above : 0)) * random.normal();
}

/// In whole mm; rows are absent in the gaps.
TextFile millmark_stage(const Site& site) {
  const std::vector<Span> gaps = {{at("2016-07-04T09:30"), at("2016-07-04T11:30")},
                                  {at("2017-01-20T14:00"), at("2017-01-23T10:00")},
                                  {at("2018-11-02T03:00"), at("2018-11-02T12:15")},
                                  {at("2021-02-11T00:00"), at("2021-02-25T09:00")},
                                  {at("2024-05-30T08:15"), at("2024-05-30T09:00")}};
  const Span drift{at("2017-03-10T00:00"), at("2017-05-02T10:00")};
  Random random(301);
  std::string text = "station,time,stage_m\n";
  for (std::size_t i = 0; i < site.level_m.size(); ++i) {
    const Seconds time = time_of(i);
    double stage = site.level_m[i] - site.zero_at(time) + noise(site, i, random);
    if (drift.holds(time)) {
      stage -= 0.056 * static_cast<double>(time - drift.from) / static_cast<double>(drift.until - drift.from);
    }
    if (in_any(gaps, time)) continue;
    text += site.id + "," + local_text(time, kHour) + "," + fixed(rounded(stage, 3), 3) + "\n";
  }
  return {"stage_TAR-1.csv", text};
}

/// In hundredths of a foot, as its old recorder gives it; blank where a reading is missing.
TextFile lowbridge_stage(const Site& site) {
  const std::vector<Span> gaps = {{at("2016-12-05T10:00"), at("2016-12-05T16:30")},
                                  {at("2019-07-18T06:00"), at("2019-07-21T06:00")},
                                  {at("2022-03-03T00:00"), at("2022-03-04T00:00")}};
  const std::vector<Span> doubtful = {{at("2021-06-01T00:00"), at("2021-06-15T00:00")}};
  Random random(302);
  std::string text = "station,time,stage_ft,quality\n";
  for (std::size_t i = 0; i < site.level_m.size(); ++i) {
    const Seconds time = time_of(i);
    const double stage_ft = (site.level_m[i] - site.zero_at(time) + noise(site, i, random)) / 0.3048;
    const std::string reading = in_any(gaps, time) ? "" : fixed(rounded(stage_ft, 2), 2);
    const char* quality = in_any(gaps, time) ? "missing" : in_any(doubtful, time) ? "suspect" : "good";
    text += site.id + "," + local_text(time, kHour) + "," + reading + "," + quality + "\n";
  }
  return {"stage_TAR-2.csv.gz", text};
}

}  // namespace

std::vector<TextFile> stage_files(const Site& millmark, const Site& lowbridge) {
  return {millmark_stage(millmark), lowbridge_stage(lowbridge)};
}

}  // namespace scenario
