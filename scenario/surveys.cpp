// Surveys: fewer points than the bed has, one level error common to a whole survey, a small one at each
// point.

#include "arithmetic.hpp"
#include "field.hpp"

namespace scenario {
namespace {

/// A point that does not move: what makes levels of different surveys comparable.
struct Mark {
  double distance_m;
  const char* name;
};

struct SectionPlan {
  const char* name;
  bool crest;        ///< of the crest, else of the channel
  double until_m;    ///< surveyed from the left end to here
  double spacing_m;  ///< in the main part; 5.3 m on the floodplain
  std::vector<Mark> marks;
};

struct SurveyPlan {
  const char* id;
  const char* at;        ///< station time
  double level_error_m;  ///< what the survey is really off by
  double level_uncertainty_m;
  std::uint64_t seed;
  std::vector<SectionPlan> sections;
};

constexpr double kFloodplainSpacing = 5.3;
constexpr double kPointError = 0.010;
constexpr double kMarkError = 0.003;

/// Whether the strip that begins at a distance is floodplain; at `last`, the end of the survey, the strip
/// before it.
bool on_floodplain(const Bed& bed, double distance, double last) {
  bool floodplain = false;
  for (const BedPoint& p : bed) {
    if (p.distance_m <= distance + 1e-9 && p.distance_m < last - 1e-9) floodplain = p.floodplain;
  }
  return floodplain;
}

std::vector<double> distances(const Bed& bed, const SectionPlan& plan) {
  std::vector<double> all;
  double next = 0;
  while (next < plan.until_m - 0.3) {
    all.push_back(next);
    const double spacing = on_floodplain(bed, next, plan.until_m) ? kFloodplainSpacing : plan.spacing_m;
    double step = next + spacing;
    // The pile wall, where the main channel ends, is always surveyed.
    for (const Mark& mark : plan.marks) {
      if (mark.distance_m > next && mark.distance_m < step + 0.3) step = mark.distance_m;
    }
    next = step;
  }
  all.push_back(plan.until_m);
  return all;
}

TextFile survey_file(const Site& site, const SurveyPlan& plan) {
  Random random(plan.seed);
  const State& state = site.state_at(at(plan.at));
  std::string text =
      "station,survey,surveyed_at,cross_section,part,distance_m,elevation_m,level_uncertainty_m,mark\n";
  for (const SectionPlan& section : plan.sections) {
    const Bed& bed = section.crest ? state.crest : state.channel;
    for (const double distance : distances(bed, section)) {
      const char* mark = "";
      for (const Mark& m : section.marks) {
        if (m.distance_m == distance) mark = m.name;
      }
      const bool floodplain = on_floodplain(bed, distance, section.until_m);
      const double own_error = (*mark != 0 ? kMarkError : kPointError) * random.normal();
      const double elevation = elevation_at(bed, distance) + plan.level_error_m + own_error;
      text += site.id + "," + plan.id + "," + plan.at + "," + section.name + "," +
              (floodplain ? "meadow" : "main") + "," + fixed(distance, 2) + "," +
              fixed(rounded(elevation, 3), 3) + "," + fixed(plan.level_uncertainty_m, 3) + "," + mark + "\n";
    }
  }
  return {std::string("survey_") + plan.id + ".csv", text};
}

}  // namespace

std::vector<TextFile> survey_files(const Site& millmark, const Site& lowbridge) {
  const std::vector<Mark> bar{{0, "bolt BL"}, {30.5, "bolt BR"}};
  const std::vector<Mark> gauge{{0, "bolt GL"}, {29.0, "pile wall"}, {92.0, "gate post"}};
  const std::vector<Mark> pier{{0, "pier cap L"}, {49.0, "pier cap R"}};
  const SectionPlan crest{"BAR", true, 30.5, 1.25, bar};
  const SectionPlan whole{"GAUGE", false, 92.0, 1.45, gauge};
  const SectionPlan channel_only{"GAUGE", false, 29.0, 1.45, gauge};
  const SectionPlan pier_section{"PIER", false, 49.0, 1.7, pier};
  return {survey_file(millmark, {"M2015", "2015-10-06T10:30", 0.012, 0.03, 101, {crest, whole}}),
          survey_file(millmark, {"M2020", "2020-01-29T11:00", -0.024, 0.03, 102, {crest, channel_only}}),
          survey_file(millmark, {"M2022", "2022-12-07T09:45", 0.017, 0.03, 103, {crest, whole}}),
          survey_file(lowbridge, {"L2015", "2015-10-07T10:00", -0.010, 0.03, 104, {pier_section}}),
          survey_file(lowbridge, {"L2020", "2020-01-30T10:15", 0.014, 0.03, 105, {pier_section}})};
}

}  // namespace scenario
