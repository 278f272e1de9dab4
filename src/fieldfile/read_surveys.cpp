#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "fieldfile/readers.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr Range kDistance{-1e5, 1e5, true, "from -100 to 100 km"};
constexpr std::size_t kFewestPoints = 3;

/// What the checks need of one cross-section while its points arrive.
struct Section {
  Finding first;           // place of its first point
  std::size_t points = 0;  // rows, faulty ones too: they are points of the field book all the same
  int direction = 0;       // +1 rising distances, -1 falling, 0 none yet
  bool faulty = false;
  std::optional<double> last;
  std::set<std::string> marks;
};

/// One survey while its rows arrive.
struct Draft {
  LocatedSurvey located;
  std::string current;  // cross-section of the row before
  std::map<std::string, Section> sections;
  std::vector<std::string> order;  // of the sections
};

/// Time and uncertainty belong to the survey: the first row gives them, later rows repeat them or leave them
/// blank.
void read_survey_values(Row& row, const KnownStations& known, bool first, Survey& survey) {
  const auto at = row.time("surveyed_at", known, first);
  if (first) survey.surveyed_at = at.value_or(Instant{});
  if (!first && at && *at != survey.surveyed_at) {
    row.fault("surveyed_at", fmt::format("survey {} has another surveyed_at above", survey.id),
              "the same time in all rows of a survey");
  }
  const auto uncertainty = row.number("level_uncertainty", kHeightUncertainty);
  if (uncertainty && survey.level_uncertainty_m && *uncertainty != *survey.level_uncertainty_m) {
    row.fault("level_uncertainty",
              fmt::format("survey {} has another {} above", survey.id, row.title("level_uncertainty")),
              "the same value in all rows of a survey");
  }
  if (uncertainty && !survey.level_uncertainty_m) survey.level_uncertainty_m = uncertainty;
  const std::string remark(row.text("remark"));
  if (!remark.empty() && survey.remark.find(remark) == std::string::npos) {
    survey.remark += (survey.remark.empty() ? "" : "; ") + remark;
  }
}

/// Distances of a section run one way; equal ones are vertical walls.
void check_direction(Row& row, Section& section, double distance) {
  if (section.last && distance != *section.last) {
    const int direction = distance > *section.last ? 1 : -1;
    if (section.direction == 0) section.direction = direction;
    if (direction != section.direction) {
      row.fault(
          "distance",
          fmt::format("the cross-section turns back: {} {}", row.title("distance"), row.text("distance")),
          "distances that run one way along the section", "put the points in order, or mend the distance");
      return;  // the point before stays the measure
    }
  }
  section.last = distance;
}

SurveyPoint read_point(Row& row, Draft& draft) {
  SurveyPoint point;
  point.cross_section = row.name("cross_section");
  point.part = row.name_or("part", "main");
  point.mark = row.name_or("mark", "");
  Section& section = draft.sections[point.cross_section];
  if (++section.points == 1) {
    section.first = row.place("cross_section");
    draft.order.push_back(point.cross_section);
  } else if (point.cross_section != draft.current) {
    row.fault("cross_section",
              fmt::format("cross-section {} comes back after {}", point.cross_section, draft.current),
              "all points of a cross-section together");
  }
  draft.current = point.cross_section;
  const auto distance = row.number("distance", kDistance, true);
  const auto elevation = row.number("elevation", kElevation, true);
  if (distance) check_direction(row, section, *distance);
  point.distance_m = distance.value_or(0);
  point.elevation_m = elevation.value_or(0);
  if (!point.mark.empty() && !section.marks.insert(point.mark).second) {
    row.fault("mark", fmt::format("mark {} stands in this cross-section twice", in_quotes(point.mark)),
              "each fixed point once");
  }
  section.faulty = section.faulty || !row.ok();
  return point;
}

void check_sections(Draft& draft, FindingSink& findings) {
  for (const std::string& name : draft.order) {
    const Section& section = draft.sections.at(name);
    const bool few = section.points < kFewestPoints;
    if (!few && (section.direction != 0 || section.faulty)) continue;
    Finding finding = section.first;
    finding.fault =
        few ? fmt::format("cross-section {} of survey {} has only {} {}", name, draft.located.record.id,
                          section.points, section.points == 1 ? "point" : "points")
            : fmt::format("cross-section {} of survey {} has no width", name, draft.located.record.id);
    finding.expected = few ? "at least 3 points" : "points at different distances";
    findings.add(std::move(finding));
  }
}

}  // namespace

void read_surveys(Table& table, const KnownStations& known, ParsedFile& file) {
  std::map<std::pair<std::string, std::string>, Draft> drafts;
  std::vector<const Draft*> order;
  Row row;
  while (table.next(row)) {
    const std::string station = row.station(known);
    const std::string id = row.name("survey");
    const auto [held, first] = drafts.try_emplace({station, id});
    Draft& draft = held->second;
    LocatedSurvey& located = draft.located;
    if (first) {
      order.push_back(&draft);
      located.record.station = station;
      located.record.id = id;
      located.place = row.place("survey");
    }
    located.withdrawn = row.withdrawn() || located.withdrawn;
    if (located.withdrawn) continue;
    read_survey_values(row, known, first, located.record);
    SurveyPoint point = read_point(row, draft);
    if (!row.ok()) continue;
    located.record.points.push_back(std::move(point));
    located.point_lines.push_back(static_cast<std::int64_t>(row.line()));
  }
  for (auto& [key, draft] : drafts) {
    if (!draft.located.withdrawn) check_sections(draft, table.findings());
  }
  for (const Draft* draft : order) file.surveys.push_back(draft->located);
}

}  // namespace scourbook::fieldfile
