#include "cli/curve_report.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <utility>

#include "cli/coefficient_sd.hpp"
#include "cli/table.hpp"

namespace scourbook::cli {
namespace {

std::string number(double value) {
  return fmt::format("{:.4g}", value);
}
std::string metres(double value) {
  return fmt::format("{:.4f}", value);
}
std::string signed_metres(double value) {
  return fmt::format("{:+.4f}", value);
}

std::string with_fate(std::string text, Fate fate, Fate usual) {
  return fate == usual ? text : text + " (" + std::string(word(fate)) + ")";
}

/// Of a gauging from the curve; one that is left out may be anywhere.
std::string deviation_text(double residual_ln) {
  constexpr double kMost = 1000;
  const double percent = 100 * std::expm1(residual_ln);
  return percent > kMost ? fmt::format("over {:.0f} %", kMost) : fmt::format("{:+.1f} %", percent);
}

std::string survey_title(const ControlCoefficients& control) {
  return fmt::format("{} from {}", word(control.survey_fate), control.survey);
}

/// "curve 2" above the column of the curve before.
std::string before_title(const RatingCurve& curve) {
  return curve.parent ? fmt::format("curve {}", *curve.parent) : std::string("before");
}

class ControlTable {
 public:
  ControlTable(const RatingCurve& curve, const ControlCoefficients& control,
               const std::optional<ControlCoefficients>& before)
      : curve_(curve),
        now_(control),
        before_(before),
        sds_(coefficient_sds(curve, control.name)),
        table_({{"coefficient"},
                {before ? before_title(curve) : "", Align::right},
                {"held", Align::right},
                {survey_title(control), Align::right},
                {"refitted", Align::right},
                {"effective", Align::right},
                {"sd", Align::right}}) {}

  std::string text() {
    const auto& c = now_;
    add("velocity scale v1, m/s", before([](const auto& b) { return number(b.velocity_scale); }),
        with_fate(number(c.velocity_scale), c.scale_fate, Fate::held), "", "", number(c.velocity_scale),
        fmt::format("{:.1f} %", 100 * sds_.ln_velocity_scale));
    add("velocity exponent b", before([](const auto& b) { return number(b.velocity_exponent); }),
        number(c.velocity_exponent), "", "", number(c.velocity_exponent), "");
    add("offset h0, m", before([](const auto& b) { return metres(b.h0_m); }),
        with_fate(signed_metres(c.allowance_h0_m), c.allowance_fate, Fate::held), metres(c.surveyed_h0_m),
        signed_metres(c.h0_m - c.surveyed_h0_m - c.allowance_h0_m), metres(c.h0_m), metres(sds_.h0_m));
    add("area exponent c", before([](const auto& b) { return number(b.area_exponent); }),
        with_fate(signed_metres(c.allowance_c), c.allowance_fate, Fate::held), number(c.surveyed_c),
        signed_metres(c.trim_c), number(c.area_exponent), number(sds_.area_exponent));
    add("area coefficient w", before([](const auto& b) { return number(b.area_coefficient); }), "",
        number(c.area_coefficient), "", "", "");
    add("section coefficient f", before([](const auto& b) { return number(b.section_coefficient); }), "",
        number(c.section_coefficient), "", number(c.section_coefficient), "");
    add("exponent b + c", before([](const auto& b) { return number(b.exponent); }), "", "", "",
        number(c.exponent), "");
    add("flow scale A, SI", before([](const auto& b) { return number(b.flow_scale); }), "", "", "",
        number(c.flow_scale), fmt::format("{:.1f} %", 100 * sds_.ln_flow_scale));
    return table_.text(4);
  }

 private:
  template <class Get>
  [[nodiscard]] std::string before(Get get) const {
    return before_ ? get(*before_) : std::string();
  }
  template <class... Cells>
  void add(Cells... cells) {
    table_.add({std::move(cells)...});
  }

  const RatingCurve& curve_;
  const ControlCoefficients& now_;
  const std::optional<ControlCoefficients>& before_;
  CoefficientSds sds_;
  Table table_;
};

const std::optional<ControlCoefficients>& before_at(const Before& before, std::size_t i) {
  static const std::optional<ControlCoefficients> none;
  return i < before.size() ? before[i] : none;
}

Json coefficients_json(const ControlCoefficients& c) {
  return {{"velocity_scale_v1_si", c.velocity_scale},
          {"velocity_exponent_b", c.velocity_exponent},
          {"h0_m", c.h0_m},
          {"area_exponent_c", c.area_exponent},
          {"area_coefficient_w_si", c.area_coefficient},
          {"section_coefficient_f_si", c.section_coefficient},
          {"exponent_b_plus_c", c.exponent},
          {"flow_scale_A_si", c.flow_scale}};
}

Json held_json(const ControlCoefficients& c) {
  return {{"velocity_scale_v1_si", c.velocity_scale},  {"velocity_exponent_b", c.velocity_exponent},
          {"allowance_h0_m", c.allowance_h0_m},        {"allowance_c", c.allowance_c},
          {"reference_depth_m", c.reference_depth_m},  {"calibrated_in_curve", c.calibrated_in},
          {"velocity_scale_fate", word(c.scale_fate)}, {"allowance_fate", word(c.allowance_fate)}};
}

Json recomputed_json(const ControlCoefficients& c) {
  return {{"survey", c.survey},
          {"survey_version", c.survey_version},
          {"surveyed_h0_m", c.surveyed_h0_m},
          {"lowest_point_m", c.lowest_point_m},
          {"surveyed_area_exponent_c", c.surveyed_c},
          {"area_coefficient_w_si", c.area_coefficient},
          {"section_coefficient_f_si", c.section_coefficient},
          {"range_from_m", c.range_from_m},
          {"range_to_m", c.range_to_m},
          {"law_misfit_pct", 100 * c.law_misfit},
          {"fate", word(c.survey_fate)}};
}

Json refitted_json(const RatingCurve& curve, const ControlCoefficients& c) {
  const double level_error = c.survey_fate == Fate::carried ? 0 : curve.survey_level_error_m;
  return {{"survey_level_error_m", level_error},
          {"trim_h0_m", c.trim_h0_m},
          {"trim_c", c.trim_c},
          {"fate", word(c.trim_fate)}};
}

Json effective_json(const ControlCoefficients& c) {
  return {{"h0_m", c.h0_m},
          {"area_exponent_c", c.area_exponent},
          {"exponent_b_plus_c", c.exponent},
          {"flow_scale_A_si", c.flow_scale}};
}

}  // namespace

Before before_of(const RatingCurve& curve, const std::optional<RatingCurve>& parent) {
  if (!parent) return {};
  Before before;
  for (const auto& control : curve.controls) {
    const auto& all = parent->controls;
    const auto same =
        std::find_if(all.begin(), all.end(), [&](const auto& c) { return c.name == control.name; });
    before.push_back(same == all.end() ? std::nullopt : std::optional(*same));
  }
  return before;
}

std::string controls_text(const RatingCurve& curve, const Before& before) {
  std::string text;
  for (std::size_t i = 0; i < curve.controls.size(); ++i) {
    const ControlCoefficients& c = curve.controls[i];
    text += fmt::format(
        "{}: {}, cross-section {}, part {}; area law over {:.3f} to {:.3f} m, misses by {:.1f} % at most\n",
        c.name, word(c.law), c.cross_section, c.part, c.range_from_m, c.range_to_m, 100 * c.law_misfit);
    text += ControlTable(curve, c, before_at(before, i)).text();
  }
  if (curve.takeover_level_m) {
    text +=
        fmt::format("the channel takes over from the section at level {:.3f} m\n", *curve.takeover_level_m);
  }
  return text;
}

std::string gaugings_text(const RatingCurve& curve) {
  if (curve.gaugings.empty()) return "no gauging in the period\n";
  Table table({{"gauging"},
               {"use"},
               {"as"},
               {"level m", Align::right},
               {"gauged m3/s", Align::right},
               {"curve m3/s", Align::right},
               {"deviation", Align::right},
               {"sd", Align::right},
               {"why"}});
  for (const CurveGauging& g : curve.gaugings) {
    const std::string deviation = g.residual ? deviation_text(*g.residual) : "";
    const std::string sd = g.residual && g.sd_ln_q > 0 ? fmt::format("{:.1f} %", 100 * g.sd_ln_q) : "";
    table.add({g.gauging, std::string(word(g.use)), g.role, fmt::format("{:.3f}", g.level_m),
               number(g.discharge_m3s), number(g.curve_m3s), deviation, sd, g.reason});
  }
  return table.text();
}

std::string diagnostics_text(const RatingCurve& curve) {
  std::string text;
  for (const Diagnostic& d : curve.diagnostics) text += wrapped(d.verdict + ": " + d.text);
  return text;
}

std::string remarks_text(const RatingCurve& curve) {
  std::string text;
  for (const std::string& remark : curve.remarks) text += wrapped("! " + remark);
  return text;
}

Json controls_json(const RatingCurve& curve, const Before& before) {
  Json json = Json::array();
  for (std::size_t i = 0; i < curve.controls.size(); ++i) {
    const ControlCoefficients& c = curve.controls[i];
    const CoefficientSds sds = coefficient_sds(curve, c.name);
    Json one = {{"control", c.name},
                {"kind", word(c.kind)},
                {"cross_section", c.cross_section},
                {"part", c.part},
                {"flow_law", word(c.law)}};
    one["held"] = held_json(c);
    one["recomputed"] = recomputed_json(c);
    one["refitted"] = refitted_json(curve, c);
    one["effective"] = effective_json(c);
    one["sd"] = {{"ln_velocity_scale", sds.ln_velocity_scale},
                 {"h0_m", sds.h0_m},
                 {"area_exponent_c", sds.area_exponent},
                 {"ln_flow_scale", sds.ln_flow_scale}};
    one["before"] = before_at(before, i) ? coefficients_json(*before_at(before, i)) : Json(nullptr);
    json.push_back(std::move(one));
  }
  return json;
}

Json gaugings_json(const RatingCurve& curve) {
  Json json = Json::array();
  for (const CurveGauging& g : curve.gaugings) {
    json.push_back({{"gauging", g.gauging},
                    {"version", g.version},
                    {"use", word(g.use)},
                    {"reason", g.reason},
                    {"role", g.role},
                    {"level_m", g.level_m},
                    {"discharge_m3s", g.discharge_m3s},
                    {"curve_m3s", g.curve_m3s},
                    {"residual_ln", g.residual ? Json(*g.residual) : Json(nullptr)},
                    {"sd_ln", g.sd_ln_q}});
  }
  return json;
}

Json diagnostics_json(const RatingCurve& curve) {
  Json json = Json::array();
  for (const Diagnostic& d : curve.diagnostics) {
    json.push_back({{"name", d.name},
                    {"value", d.value ? Json(*d.value) : Json(nullptr)},
                    {"limit", d.limit ? Json(*d.limit) : Json(nullptr)},
                    {"verdict", d.verdict},
                    {"text", d.text},
                    {"rule", d.rule},
                    {"source", d.source}});
  }
  return json;
}

Json curve_head_json(const RatingCurve& curve, UtcOffset offset) {
  Json json = {{"curve", curve.number},    {"station", curve.station},
               {"form", word(curve.form)}, {"hold", word(curve.hold)},
               {"survey", curve.survey},   {"survey_version", curve.survey_version},
               {"lineage", curve.lineage}};
  json["descends_from"] = curve.parent ? Json(*curve.parent) : Json(nullptr);
  json["from"] = format_time(curve.from, offset);
  json["until"] = curve.until ? Json(format_time(*curve.until, offset)) : Json(nullptr);
  json["takeover_level_m"] = curve.takeover_level_m ? Json(*curve.takeover_level_m) : Json(nullptr);
  json["surveyed_top_m"] = curve.surveyed_top_m;
  json["gauged_low_m3s"] = curve.gauged_low_m3s ? Json(*curve.gauged_low_m3s) : Json(nullptr);
  json["gauged_high_m3s"] = curve.gauged_high_m3s ? Json(*curve.gauged_high_m3s) : Json(nullptr);
  json["model_error_ln"] = curve.model_error;
  json["inferred"] = curve.inferred;
  json["carried"] = curve.carried;
  json["remarks"] = curve.remarks;
  return json;
}

std::string curve_head_text(const RatingCurve& curve, UtcOffset offset) {
  const std::string origin =
      curve.parent ? fmt::format("descends from curve {}; {} held", *curve.parent, word(curve.hold))
                   : std::string("first curve of its lineage");
  const std::string until = curve.until ? format_time(*curve.until, offset) : std::string("open");
  return fmt::format("curve {} of {}: survey {}, {}\n  derived for {} to {}\n", curve.number, curve.station,
                     curve.survey, origin, format_time(curve.from, offset), until);
}

}  // namespace scourbook::cli
