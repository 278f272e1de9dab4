#include "cli/trace_report.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

#include "cli/edition_report.hpp"
#include "cli/trace_parts.hpp"
#include "rating/evaluate.hpp"

namespace scourbook::cli {
namespace {

std::string reading_text(const publish::TracedReading& r, UtcOffset offset) {
  std::string text = fmt::format("reading {}: {} ({}), {} line {}, act {}\n", format_time(r.time, offset),
                                 r.recorded, word(r.quality), r.file, r.line, r.act);
  if (!r.has_level) return text;
  text += fmt::format("  stage {:.8g} m + gauge zero {:.8g} m ({} line {})", r.stage.metres(),
                      r.gauge_zero.metres(), r.gauge_zero_file, r.gauge_zero_source.line);
  if (r.correction.ticks() != 0) text += fmt::format(" + stage correction {:+.8g} m", r.correction.metres());
  return text + fmt::format(" = level {:.8f} m\n", r.level.metres());
}

Json reading_json(const publish::TracedReading& r, UtcOffset offset) {
  Json json = {{"time", format_time(r.time, offset)}, {"recorded", r.recorded}, {"quality", word(r.quality)}};
  const auto metres = [&](double value) { return r.has_level ? Json(value) : Json(nullptr); };
  json["stage_m"] = metres(r.stage.metres());
  json["gauge_zero_m"] = metres(r.gauge_zero.metres());
  json["stage_correction_m"] = metres(r.correction.metres());
  json["level_m"] = metres(r.level.metres());
  json["file"] = r.file;
  json["line"] = r.line;
  json["file_sha256"] = r.file_sha256;
  json["act"] = r.act;
  json["gauge_zero_file"] = r.gauge_zero_file;
  json["gauge_zero_line"] = r.gauge_zero_source.line;
  return json;
}

std::string flow_text(const std::optional<double>& flow, double sd, Flags flags, Quality quality) {
  if (!flow) return fmt::format("  no flow; quality {}\n", word(quality));
  const std::string flag_words = words(flags);
  return fmt::format("  {:.7g} m3/s, 95 % uncertainty {:.1f} %, quality {}{}\n", *flow, rating::u95_pct(sd),
                     word(quality), flag_words.empty() ? std::string() : ", flags: " + flag_words);
}

std::string again_text(const std::optional<double>& again, bool agrees) {
  const std::string figure = again ? fmt::format("{:.17g} m3/s", *again) : std::string("no flow");
  return fmt::format("  computed again from what is listed below: {}; {}\n", figure,
                     agrees ? "it agrees" : "IT DOES NOT AGREE");
}

Json optional_json(const std::optional<double>& value) {
  return value ? Json(*value) : Json(nullptr);
}

template <class Traced>
void add_common(Json& json, const store::Book& book, const Traced& traced, UtcOffset offset) {
  json.update(state_json(book, traced.view));
  json["u95_pct"] = rating::u95_pct(traced.sd_ln_q);
  json["quality"] = word(traced.quality);
  json["flags"] = words(traced.flags);
  json["published"] = figure_json(published_of(traced));
  json["agrees"] = traced.agrees();
  json["acts"] = acts_json(traced.acts, offset);
}

}  // namespace

std::string trace_text(const store::Book& book, const publish::TracedValue& traced, UtcOffset offset) {
  std::string text = fmt::format("flow of {} at {}\n", traced.station, format_time(traced.time, offset));
  text += flow_text(traced.discharge_m3s, traced.sd_ln_q, traced.flags, traced.quality);
  if (!traced.no_flow_because.empty()) text += "  because: " + traced.no_flow_because + "\n";
  text += figure_text(published_of(traced)) + again_text(traced.recomputed_m3s, traced.agrees());
  text += "  " + state_line(book, traced.view) + "\n";
  for (const auto& reading : traced.readings) text += reading_text(reading, offset);
  if (traced.readings.size() == 2) text += "  between two readings the flow is linear in time\n";
  if (!traced.curves.empty()) {
    text += fmt::format("period {} to {}: curve {}; edition {}, act {}\n",
                        format_time(traced.period.from, offset), end_text(traced.period.until, offset),
                        traced.period.curve.value_or(0),
                        traced.view.edition ? traced.view.edition->number : 0, traced.edition_act);
  }
  int last = 0;
  for (const auto& curve : traced.curves) {
    text += curve.curve.number == last ? traced_flow_text(curve) : traced_curve_text(curve, true);
    last = curve.curve.number;
  }
  return text + acts_text(traced.acts, offset);
}

std::string trace_text(const store::Book& book, const publish::TracedDay& traced, UtcOffset offset) {
  std::string text = fmt::format("mean flow of {} on {}\n", traced.station, format_day(traced.day));
  text += flow_text(traced.mean_m3s, traced.sd_ln_q, traced.flags, traced.quality);
  text += fmt::format("  over {:.4g} % of the day, in {} pieces\n", 100 * traced.share, traced.pieces.size());
  text += figure_text(published_of(traced)) + again_text(traced.recomputed_m3s, traced.agrees());
  text += "  " + state_line(book, traced.view) + "\n";
  text += fmt::format("stage files: {}\n", fmt::join(traced.files, ", "));
  for (const auto& curve : traced.curves) text += traced_curve_text(curve, false);
  return text + acts_text(traced.acts, offset);
}

Json trace_json(const store::Book& book, const publish::TracedValue& traced, UtcOffset offset) {
  Json json = {{"station", traced.station}, {"time", format_time(traced.time, offset)}};
  json["discharge_m3s"] = optional_json(traced.discharge_m3s);
  json["recomputed_m3s"] = optional_json(traced.recomputed_m3s);
  json["no_flow_because"] = traced.no_flow_because;
  add_common(json, book, traced, offset);
  json["edition_act"] = traced.edition_act;
  json["readings"] = Json::array();
  for (const auto& reading : traced.readings) json["readings"].push_back(reading_json(reading, offset));
  json["curves"] = Json::array();
  for (const auto& curve : traced.curves) json["curves"].push_back(traced_curve_json(curve, true));
  return json;
}

Json trace_json(const store::Book& book, const publish::TracedDay& traced, UtcOffset offset) {
  Json json = {{"station", traced.station}, {"day", format_day(traced.day)}};
  json["mean_m3s"] = optional_json(traced.mean_m3s);
  json["recomputed_m3s"] = optional_json(traced.recomputed_m3s);
  json["share"] = traced.share;
  add_common(json, book, traced, offset);
  json["stage_files"] = traced.files;
  json["pieces"] = Json::array();
  for (const auto& piece : traced.pieces) {
    json["pieces"].push_back({{"from", format_time(piece.from, offset)},
                              {"until", format_time(piece.until, offset)},
                              {"from_m3s", piece.from_m3s},
                              {"until_m3s", piece.until_m3s},
                              {"curve", piece.curve}});
  }
  json["curves"] = Json::array();
  for (const auto& curve : traced.curves) json["curves"].push_back(traced_curve_json(curve, false));
  return json;
}

}  // namespace scourbook::cli
