#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/edition_report.hpp"
#include "cli/table.hpp"

namespace scourbook::cli {
namespace {

struct HistoryArguments : Arguments {
  bool changes = false;
};

std::vector<Period> parent_periods(const store::Book& book, const Edition& edition) {
  if (!edition.parent) return {};
  const auto parent = book.edition(edition.station, *edition.parent);
  return parent ? parent->periods : std::vector<Period>{};
}

struct CurveLine {
  RatingCurve curve;
  std::string state;
  std::vector<std::string> out_of_date;
};

std::vector<CurveLine> curve_lines(const store::Book& book, const history::View& view) {
  std::vector<CurveLine> lines;
  const auto editions = book.editions(view.station, view.known);
  for (auto& curve : book.curves(view.station, view.known)) {
    const std::string state(word(history::state_of(curve.number, editions)));
    auto reasons = history::out_of_date(book, curve, view.known);
    lines.push_back({std::move(curve), state, std::move(reasons)});
  }
  return lines;
}

std::string curves_text(const std::vector<CurveLine>& lines) {
  if (lines.empty()) return "no curve was derived yet\n";
  Table table({{"curve", Align::right}, {"state"}, {"survey"}, {"descends from"}, {"out of date because"}});
  for (const CurveLine& line : lines) {
    std::string why;
    for (const auto& reason : line.out_of_date) why += (why.empty() ? "" : "; ") + reason;
    table.add({std::to_string(line.curve.number), line.state, line.curve.survey,
               line.curve.parent ? std::to_string(*line.curve.parent) : std::string("first"), why});
  }
  return table.text();
}

Json curves_json(const std::vector<CurveLine>& lines) {
  Json json = Json::array();
  for (const CurveLine& line : lines) {
    Json one = {{"curve", line.curve.number}, {"state", line.state}, {"survey", line.curve.survey}};
    one["descends_from"] = line.curve.parent ? Json(*line.curve.parent) : Json(nullptr);
    one["out_of_date"] = line.out_of_date;
    json.push_back(std::move(one));
  }
  return json;
}

Json history_json(const store::Book& book, const history::View& view, const Act* act, bool changes,
                  UtcOffset offset) {
  Json json = {{"station", view.station}};
  json.update(state_json(book, view));
  json["state"] = nullptr;
  json["periods"] = Json::array();
  if (view.edition) {
    const auto newest = book.newest_edition(view.station, view.known);
    json["state"] = newest && newest->number == view.edition->number ? "current" : "superseded";
    json["act"] = act->number;
    json["by"] = act->who;
    json["reason"] = act->reason;
    json["periods"] = periods_json(book, view.station, view.edition->periods, offset);
    if (changes) {
      json["changes"] =
          changes_json(changes_between(parent_periods(book, *view.edition), view.edition->periods), offset);
    }
  }
  json["curves"] = curves_json(curve_lines(book, view));
  return json;
}

std::string history_text(const store::Book& book, const history::View& view, const Act* act, bool changes,
                         const Station& station, UtcOffset offset) {
  std::string text = fmt::format("{} {}: {}\n", station.id, station.name, state_line(book, view));
  if (!view.edition) {
    text += "  nothing was adopted yet\n";
  } else {
    const auto newest = book.newest_edition(view.station, view.known);
    const bool current = newest && newest->number == view.edition->number;
    text += fmt::format("edition {}, {}: act {}, {}, {}: {}\n", view.edition->number,
                        current ? "current" : "superseded", act->number, format_time(act->time, offset),
                        act->who, act->reason);
    text += periods_text(book, view.station, view.edition->periods, offset);
    if (changes) {
      text += view.edition->parent ? fmt::format("changes against edition {}\n", *view.edition->parent)
                                   : std::string("changes against an empty history\n");
      text +=
          changes_text(changes_between(parent_periods(book, *view.edition), view.edition->periods), offset);
    }
  }
  return text + "curves\n" + curves_text(curve_lines(book, view));
}

Exit history_command(const HistoryArguments& arguments) {
  const auto book = store::Book::open_to_read(arguments.book);
  const Station station = station_of(book, arguments);
  const history::View view = view_of(book, arguments, station);
  const UtcOffset offset = shown_offset(station, arguments);
  std::optional<Act> act;
  if (view.edition) act = book.act(view.edition->act);
  if (arguments.json) {
    print(history_json(book, view, act ? &*act : nullptr, arguments.changes, offset));
  } else {
    print(history_text(book, view, act ? &*act : nullptr, arguments.changes, station, offset));
  }
  return Exit::done;
}

}  // namespace

void add_history(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<HistoryArguments>();
  CLI::App& command =
      *program.add_subcommand("history", "the periods of an edition, and the state of every curve");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_flag("--changes", arguments->changes, "what it changed against the edition before it");
  add_view(command, *arguments);
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback(
      [&chosen, arguments] { chosen.action = [arguments] { return history_command(*arguments); }; });
}

}  // namespace scourbook::cli
