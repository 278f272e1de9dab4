#include <fmt/format.h>

#include <charconv>
#include <cmath>

#include "cli/commands.hpp"
#include "cli/curve_report.hpp"
#include "cli/table.hpp"
#include "history/adopt.hpp"
#include "history/level_datum.hpp"
#include "publish/series.hpp"
#include "rating/evaluate.hpp"

namespace scourbook::cli {
namespace {

struct CurveArguments : Arguments {
  std::optional<int> number;
  std::string at, table;
};

using Kind = store::StoreError::Kind;

/// Stages of a table as whole ticks, so that no step is lost to rounding.
struct StageSteps {
  Stage from, to, step;
};

StageSteps steps_of(const std::string& text) {
  double values[3] = {};
  const char* at = text.data();
  const char* end = at + text.size();
  bool good = true;
  for (int i = 0; i < 3 && good; ++i) {
    const auto [rest, fault] = std::from_chars(at, end, values[i]);
    good = fault == std::errc{} && std::isfinite(values[i]) && std::abs(values[i]) < 1e5 &&
           (i < 2 ? rest != end && *rest == ',' : rest == end);
    at = i < 2 && good ? rest + 1 : rest;
  }
  if (!good || values[2] < 1e-4 || values[1] < values[0] || (values[1] - values[0]) / values[2] > 1e5) {
    throw UsageError(
        fmt::format("--table: \"{}\"; expected FROM,TO,STEP in m of stage, for example 0.2,3.0,0.05", text));
  }
  return {Stage::from_metres(values[0]), Stage::from_metres(values[1]), Stage::from_metres(values[2])};
}

/// The period of the view's edition that uses the curve at `at`, else its first one.
std::optional<Period> period_of(const history::View& view, int curve) {
  if (!view.edition) return {};
  for (const Period& period : view.edition->periods) {
    if (period.curve == curve) return period;
  }
  return {};
}

int number_of(const history::View& view, const CurveArguments& arguments, std::optional<Instant> at) {
  if (arguments.number) return *arguments.number;
  if (!view.edition)
    throw store::StoreError(Kind::refused, "no curve is in force yet; name one by its number");
  const auto& periods = view.edition->periods;
  if (!at) {
    for (auto period = periods.rbegin(); period != periods.rend(); ++period) {
      if (period->curve) return *period->curve;
    }
    throw store::StoreError(Kind::refused, "no period of the edition has a curve");
  }
  const int index = history::period_at(periods, *at);
  if (index < 0 || !periods[static_cast<std::size_t>(index)].curve) {
    throw store::StoreError(Kind::refused, "no curve is in force at that time");
  }
  return *periods[static_cast<std::size_t>(index)].curve;
}

struct TableRow {
  double stage_m, level_m, discharge_m3s, lower_m3s, upper_m3s;
  std::string control;
};

std::vector<TableRow> rows_of(const RatingCurve& curve, const StageSteps& steps, GaugeZero zero) {
  std::vector<TableRow> rows;
  for (Stage stage = steps.from; stage <= steps.to;
       stage = stage + HeightChange::from_ticks(steps.step.ticks())) {
    const double level = (stage + zero).metres();
    const rating::Flow flow = rating::evaluate(curve, level);
    const double factor = std::exp(1.96 * rating::sd_ln_q(curve, level));
    rows.push_back({stage.metres(), level, flow.discharge_m3s, flow.discharge_m3s / factor,
                    flow.discharge_m3s * factor,
                    flow.control < 0 ? std::string("none")
                                     : curve.controls[static_cast<std::size_t>(flow.control)].name});
  }
  return rows;
}

Json rows_json(const std::vector<TableRow>& rows) {
  Json json = Json::array();
  for (const TableRow& row : rows) {
    json.push_back({{"stage_m", row.stage_m},
                    {"level_m", row.level_m},
                    {"discharge_m3s", row.discharge_m3s},
                    {"lower95_m3s", row.lower_m3s},
                    {"upper95_m3s", row.upper_m3s},
                    {"control", row.control}});
  }
  return json;
}

std::string rows_csv(const std::vector<TableRow>& rows) {
  std::string text = "stage_m,level_m,discharge_m3s,lower95_m3s,upper95_m3s,control\n";
  for (const TableRow& row : rows) {
    text += fmt::format("{:.4f},{:.4f},{:.5g},{:.5g},{:.5g},{}\n", row.stage_m, row.level_m,
                        row.discharge_m3s, row.lower_m3s, row.upper_m3s, row.control);
  }
  return text;
}

Exit table(const store::Book& book, const history::View& view, const CurveArguments& arguments,
           const RatingCurve& curve, std::optional<Instant> at, UtcOffset offset) {
  const StageSteps steps = steps_of(arguments.table);
  const auto period = period_of(view, curve.number);
  const Instant time = at ? *at : period ? period->from : curve.from;
  const auto datum = history::level_datum(book, view.station, Known{view.data_version});
  const auto zero = datum.zero_at(time);
  if (!zero) {
    throw store::StoreError(
        Kind::refused, fmt::format("{} has no gauge zero at {}; take one in, or say --at TIME", view.station,
                                   format_time(time, offset)));
  }
  const auto rows = rows_of(curve, steps, *zero);
  if (arguments.json) {
    Json json = curve_head_json(curve, offset);
    json["at"] = format_time(time, offset);
    json["gauge_zero_m"] = zero->metres();
    json["table"] = rows_json(rows);
    json["caution"] = publish::caution();
    print(json);
    return Exit::done;
  }
  print(fmt::format("# curve {} of {}, survey {}; stage over the gauge zero {:.4f} m of {}\n# {}\n",
                    curve.number, curve.station, curve.survey, zero->metres(), format_time(time, offset),
                    publish::caution()) +
        rows_csv(rows));
  return Exit::done;
}

Exit curve_command(const CurveArguments& arguments) {
  const auto book = store::Book::open_to_read(arguments.book);
  const Station station = station_of(book, arguments);
  const history::View view = view_of(book, arguments, station);
  std::optional<Instant> at;
  if (!arguments.at.empty()) at = time_of(arguments.at, station.clock.offset, "--at");
  const int number = number_of(view, arguments, at);
  const auto curve = book.curve(arguments.station, number, view.known);
  if (!curve) {
    throw store::StoreError(Kind::refused,
                            fmt::format("{} has no curve {}; it has {}", arguments.station, number,
                                        book.curves(arguments.station, view.known).size()));
  }
  const UtcOffset offset = shown_offset(station, arguments);
  if (!arguments.table.empty()) return table(book, view, arguments, *curve, at, offset);
  const auto parent = curve->parent ? book.curve(arguments.station, *curve->parent) : std::nullopt;
  const Before before = before_of(*curve, parent);
  const auto state = word(history::state_of(number, book.editions(arguments.station, view.known)));
  const auto reasons = history::out_of_date(book, *curve, view.known);
  if (arguments.json) {
    Json json = curve_head_json(*curve, offset);
    json["state"] = state;
    json["out_of_date"] = reasons;
    json["act"] = book.curve_act(arguments.station, number);
    json["controls"] = controls_json(*curve, before);
    json["gaugings"] = gaugings_json(*curve);
    json["diagnostics"] = diagnostics_json(*curve);
    json["caution"] = publish::caution();
    print(json);
    return Exit::done;
  }
  std::string text = curve_head_text(*curve, offset) + fmt::format("  {}\n", state);
  for (const auto& reason : reasons) text += wrapped("out of date: " + reason);
  print(text + remarks_text(*curve) + "\n" + controls_text(*curve, before) + "\n" + gaugings_text(*curve) +
        "\n" + diagnostics_text(*curve) + publish::caution() + "\n");
  return Exit::done;
}

}  // namespace

void add_curve(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<CurveArguments>();
  CLI::App& command = *program.add_subcommand("curve", "the coefficients of a curve, or its table in stage");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("NUMBER", arguments->number, "curve; the one in force at --at, or the last in force");
  command.add_option("--table", arguments->table, "FROM,TO,STEP in m of stage: a table of flows, as CSV");
  command.add_option("--at", arguments->at,
                     "time whose gauge zero and curve count; begin of the curve's period");
  add_view(command, *arguments);
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback(
      [&chosen, arguments] { chosen.action = [arguments] { return curve_command(*arguments); }; });
}

}  // namespace scourbook::cli
