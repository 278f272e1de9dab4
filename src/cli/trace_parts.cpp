#include "cli/trace_parts.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "cli/table.hpp"
#include "publish/rounding.hpp"

namespace scourbook::cli {
namespace {

std::string gaugings_used(const RatingCurve& curve) {
  std::string used, out;
  for (const CurveGauging& g : curve.gaugings) {
    std::string& list = g.use == GaugingUse::left_out ? out : used;
    list += (list.empty() ? "" : ", ") + g.gauging;
  }
  std::string text = used.empty() ? "no gaugings used" : "gaugings used: " + used;
  if (!out.empty()) text += "; left out: " + out;
  return text;
}

std::string control_line(const publish::TracedControl& traced) {
  const ControlCoefficients& c = traced.control;
  return fmt::format("    {}: {:.6g} (z - {:.4f})^{:.5g} = {:.6g} m3/s{}\n", c.name, c.flow_scale, c.h0_m,
                     c.exponent, traced.discharge_m3s, traced.counts ? ", counts" : "");
}

/// "take" out of "scourbook take BOOK FILE"; the ledger has the whole.
std::string deed(const std::string& command) {
  const auto from = command.find(' ');
  if (from == std::string::npos) return command;
  return command.substr(from + 1, command.find(' ', from + 1) - from - 1);
}

}  // namespace

std::string figure_text(const PublishedFigure& figure) {
  if (!figure.publication) return "  not published: a working record\n";
  const auto shown = [&](const std::optional<std::int64_t>& units) {
    return units ? publish::format_published(*units, figure.decimals, figure.digits) + " m3/s"
                 : std::string("no figure");
  };
  if (!figure.units && figure.recomputed) {
    return fmt::format("  publication {} (replay {}, act {}) covers this time and holds no figure at it\n",
                       *figure.publication, figure.replay.value_or(0), figure.act);
  }
  return fmt::format(
      "  published as {} in publication {} (replay {}, act {}); computed again and rounded: {}\n",
      shown(figure.units), *figure.publication, figure.replay.value_or(0), figure.act,
      shown(figure.recomputed));
}

Json figure_json(const PublishedFigure& figure) {
  if (!figure.publication) return nullptr;
  const auto shown = [&](const std::optional<std::int64_t>& units) {
    return units ? Json(publish::format_published(*units, figure.decimals, figure.digits)) : Json(nullptr);
  };
  return {{"publication", *figure.publication},
          {"act", figure.act},
          {"replay", figure.replay.value_or(0)},
          {"discharge_as_published_m3s", shown(figure.units)},
          {"recomputed_as_published_m3s", shown(figure.recomputed)}};
}

std::string traced_flow_text(const publish::TracedCurve& traced) {
  std::string text = fmt::format(
      "  at level z = {:.8f} m: {:.6g} m3/s{}\n", traced.level_m, traced.discharge_m3s,
      traced.weight < 1 ? fmt::format(", weight {:.4f} in the blend", traced.weight) : std::string());
  for (const auto& control : traced.controls) text += control_line(control);
  return text;
}

std::string traced_curve_text(const publish::TracedCurve& traced, bool with_flow) {
  const RatingCurve& curve = traced.curve;
  std::string text =
      fmt::format("curve {}: survey {} version {} ({} line {}), act {}\n", curve.number, curve.survey,
                  curve.survey_version, traced.survey_file, traced.survey_source.line, traced.act);
  if (curve.parent)
    text += fmt::format("  descends from curve {}; {} held\n", *curve.parent, word(curve.hold));
  text += wrapped(gaugings_used(curve));
  for (const auto& reason : traced.out_of_date) text += wrapped("out of date: " + reason);
  return with_flow ? text + traced_flow_text(traced) : text;
}

Json traced_curve_json(const publish::TracedCurve& traced, bool with_flow) {
  const RatingCurve& curve = traced.curve;
  Json json = {{"curve", curve.number},
               {"act", traced.act},
               {"survey", curve.survey},
               {"survey_version", curve.survey_version},
               {"survey_file", traced.survey_file},
               {"survey_line", traced.survey_source.line},
               {"out_of_date", traced.out_of_date}};
  json["descends_from"] = curve.parent ? Json(*curve.parent) : Json(nullptr);
  json["gaugings"] = Json::array();
  for (const CurveGauging& g : curve.gaugings) {
    json["gaugings"].push_back({{"gauging", g.gauging}, {"version", g.version}, {"use", word(g.use)}});
  }
  if (!with_flow) return json;
  json["weight"] = traced.weight;
  json["level_m"] = traced.level_m;
  json["discharge_m3s"] = traced.discharge_m3s;
  json["controls"] = Json::array();
  for (const auto& control : traced.controls) {
    json["controls"].push_back({{"control", control.control.name},
                                {"flow_scale_A_si", control.control.flow_scale},
                                {"h0_m", control.control.h0_m},
                                {"exponent_b_plus_c", control.control.exponent},
                                {"discharge_m3s", control.discharge_m3s},
                                {"counts", control.counts}});
  }
  return json;
}

std::string acts_text(const std::vector<Act>& acts, UtcOffset offset) {
  Table table({{"act", Align::right}, {"time"}, {"by"}, {"did"}, {"reason"}});
  for (const Act& act : acts) {
    table.add(
        {std::to_string(act.number), format_time(act.time, offset), act.who, deed(act.command), act.reason});
  }
  return table.empty() ? std::string() : "acts\n" + table.text();
}

Json acts_json(const std::vector<Act>& acts, UtcOffset offset) {
  Json json = Json::array();
  for (const Act& act : acts) {
    json.push_back({{"act", act.number},
                    {"time", format_time(act.time, offset)},
                    {"by", act.who},
                    {"reason", act.reason},
                    {"command", act.command},
                    {"sha256", act.hash}});
  }
  return json;
}

}  // namespace scourbook::cli
