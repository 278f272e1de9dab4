#pragma once
// A synthetic station whose true flow is known: a rectangular channel, with a crest and a plain where wanted.

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "hydraulics/section.hpp"
#include "hydraulics/uniform_flow.hpp"
#include "rederivation/derive.hpp"

namespace made {

using namespace scourbook;
using rederivation::GaugingAtLevel;
using rederivation::Input;
using rederivation::ReachInput;
using rederivation::Result;
using rederivation::Status;

inline Instant at(const std::string& text) {
  const ParsedTime parsed = parse_time(text, UtcOffset{});
  REQUIRE(parsed.ok());
  return parsed.time;
}

/// What the channel looks like in a period.
struct Shape {
  double bed_m = 100;
  double width_m = 40;
  double bank_m = 104;
  double crest_m = 100.6;  ///< lowest point of the crest, a flat V 30 m wide
  double roughness_n = 0.03;
  bool has_crest = false;
  bool has_plain = false;  ///< 40 m wide beside the right bank, up to 2 m above it
};

inline constexpr double kSlope = 0.0004, kPlainRoughness = 0.06;

/// The points of a survey of it, `level_error_m` too high; a mark on the rock beside the bank.
inline Survey survey_of(const std::string& id, const std::string& time, const Shape& shape,
                        double level_error_m = 0) {
  Survey survey;
  survey.station = "TEST-1";
  survey.id = id;
  survey.surveyed_at = at(time);
  const auto add = [&](const char* cross_section, const char* part, double x, double z) {
    survey.points.push_back({cross_section, part, x, z + level_error_m, ""});
  };
  add("reach", "main", 0, shape.bank_m);
  add("reach", "main", 0, shape.bed_m);
  add("reach", "main", shape.width_m, shape.bed_m);
  add("reach", shape.has_plain ? "plain" : "main", shape.width_m, shape.bank_m);
  if (shape.has_plain) {
    add("reach", "plain", shape.width_m + 40, shape.bank_m + 0.4);
    add("reach", "plain", shape.width_m + 40, shape.bank_m + 2);
  }
  if (shape.has_crest) {
    add("crest", "main", 0, shape.crest_m + 2);
    add("crest", "main", 1, shape.crest_m + 0.25);
    add("crest", "main", 16, shape.crest_m);
    add("crest", "main", 31, shape.crest_m + 0.25);
    add("crest", "main", 32, shape.crest_m + 2);
  }
  return survey;
}

inline std::vector<ReachInput> reach_of(const Shape& shape) {
  std::vector<ReachInput> reach;
  ReachRow row;
  row.station = "TEST-1";
  row.valid_from = at("2010-01-01");
  if (shape.has_crest) {
    row.control = ControlKind::section;
    row.cross_section = "crest";
    row.law = FlowLaw::critical;
    row.coefficient = 1;
    reach.push_back({row, {1, 1}});
    row.coefficient.reset();
  }
  row.law = FlowLaw::manning;
  row.cross_section = "reach";
  row.slope = kSlope;
  row.roughness_n = 0.03;
  row.control = ControlKind::channel;
  reach.push_back({row, {2, 1}});
  if (shape.has_plain) {
    row.control = ControlKind::overbank;
    row.part = "plain";
    row.roughness_n = kPlainRoughness;
    reach.push_back({row, {3, 1}});
  }
  return reach;
}

/// The true flow: Manning over the section itself, critical over the crest, the smaller of both; the plain
/// added.
inline double true_flow(const Shape& shape, double level_m) {
  const Survey survey = survey_of("truth", "2010-01-01", shape);
  const hydraulics::SectionPart channel(survey.points, "reach", "main");
  double flow = hydraulics::manning_flow(channel.at(level_m), kSlope, shape.roughness_n);
  if (shape.has_crest) {
    const hydraulics::SectionPart crest(survey.points, "crest", "main");
    flow = std::min(flow, hydraulics::crest_flow(crest, level_m, 1));
  }
  if (shape.has_plain) {
    const hydraulics::SectionPart plain(survey.points, "reach", "plain");
    flow += hydraulics::manning_flow(plain.at(level_m), kSlope, kPlainRoughness);
  }
  return flow;
}

inline GaugingAtLevel gauging(const std::string& id, double level_m, double discharge_m3s) {
  GaugingAtLevel made;
  made.gauging.station = "TEST-1";
  made.gauging.id = id;
  made.gauging.start = at("2015-06-01");
  made.gauging.discharge = Discharge::from_m3s(discharge_m3s);
  made.level_m = level_m;
  return made;
}

/// Gaugings without any error at these levels, named G1, G2 ...
inline std::vector<GaugingAtLevel> exact_gaugings(const Shape& shape, const std::vector<double>& levels) {
  std::vector<GaugingAtLevel> all;
  for (const double level : levels) {
    all.push_back(gauging("G" + std::to_string(all.size() + 1), level, true_flow(shape, level)));
  }
  return all;
}

inline Input first_input(const Shape& shape, std::vector<GaugingAtLevel> gaugings = {},
                         double level_error_m = 0) {
  Input input;
  input.station = "TEST-1";
  input.survey = survey_of("S1", "2015-01-01", shape, level_error_m);
  input.reach = reach_of(shape);
  input.gaugings = std::move(gaugings);
  input.from = at("2015-01-01");
  input.until = at("2019-01-01");
  return input;
}

/// The next period: the channel has become `shape`.
inline Input next_input(const Input& first, const RatingCurve& parent, const Shape& shape,
                        std::vector<GaugingAtLevel> gaugings = {}, double level_error_m = 0) {
  Input input;
  input.station = "TEST-1";
  input.survey = survey_of("S2", "2019-01-01", shape, level_error_m);
  input.reach = first.reach;
  input.gaugings = std::move(gaugings);
  for (auto& offered : input.gaugings) {
    offered.gauging.id.insert(1, "2");
    offered.gauging.start = at("2019-06-01");
  }
  input.from = at("2019-01-01");
  input.parent = rederivation::Parent{parent, first.reach, first.survey};
  input.parent->curve.number = 1;
  input.parent->curve.lineage = 1;
  return input;
}

inline const ControlCoefficients& control(const RatingCurve& curve, const std::string& name) {
  const auto found = std::find_if(curve.controls.begin(), curve.controls.end(),
                                  [&](const auto& c) { return c.name == name; });
  REQUIRE(found != curve.controls.end());
  return *found;
}

inline const Diagnostic& diagnostic(const RatingCurve& curve, const std::string& name) {
  const auto found = std::find_if(curve.diagnostics.begin(), curve.diagnostics.end(),
                                  [&](const auto& d) { return d.name == name; });
  INFO(name);
  REQUIRE(found != curve.diagnostics.end());
  return *found;
}

inline bool has_diagnostic(const RatingCurve& curve, const std::string& name) {
  return std::any_of(curve.diagnostics.begin(), curve.diagnostics.end(),
                     [&](const auto& d) { return d.name == name; });
}

inline bool says(const std::vector<std::string>& remarks, const std::string& remark) {
  return std::find(remarks.begin(), remarks.end(), remark) != remarks.end();
}

}  // namespace made
