#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/table.hpp"

namespace scourbook::cli {
namespace {

struct LedgerArguments : Arguments {
  std::int64_t from = 1;
  std::int64_t to = INT64_MAX;
  bool rows = false;
};

Json act_json(const Act& act, UtcOffset offset) {
  Json json = {{"act", act.number},      {"time", format_time(act.time, offset)},
               {"by", act.who},          {"station", act.station},
               {"reason", act.reason},   {"command", act.command},
               {"program", act.program}, {"method_version", act.method},
               {"sha256", act.hash},     {"tables", Json::array()}};
  for (const ActTable& table : act.tables) {
    json["tables"].push_back({{"table", table.table}, {"rows", table.rows}, {"sha256", table.sha256}});
  }
  return json;
}

std::string act_text(const Act& act, UtcOffset offset, bool rows) {
  std::string text = fmt::format("act {}  {}  {}{}\n", act.number, format_time(act.time, offset), act.who,
                                 act.station.empty() ? "" : "  " + act.station);
  text += "  " + act.command + "\n";
  if (!act.reason.empty()) text += "  reason: " + act.reason + "\n";
  std::string counts;
  for (const ActTable& table : act.tables) {
    counts += fmt::format("{}{} {}", counts.empty() ? "" : ", ", table.rows, table.table);
    if (rows) text += fmt::format("  {} {}: sha256 {}\n", table.rows, table.table, table.sha256);
  }
  if (!rows) text += "  rows: " + (counts.empty() ? "none" : counts) + "\n";
  return text + fmt::format("  hash {}\n", rows ? act.hash : act.hash.substr(0, 16) + "...");
}

Exit ledger(const LedgerArguments& arguments) {
  const auto book = store::Book::open_to_read(arguments.book);
  const bool one_station = !arguments.station.empty();
  UtcOffset offset;
  if (one_station) offset = shown_offset(station_of(book, arguments), arguments);
  Json json = Json::array();
  for (const Act& act : book.acts(arguments.from, arguments.to)) {
    if (one_station && !act.station.empty() && act.station != arguments.station) continue;
    if (arguments.json) {
      json.push_back(act_json(act, offset));
    } else {
      print(act_text(act, offset, arguments.rows));
    }
  }
  if (arguments.json) print(json);
  return Exit::done;
}

}  // namespace

void add_ledger(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<LedgerArguments>();
  CLI::App& command = *program.add_subcommand("ledger", "the acts: who did what, when and why");
  add_book(command, *arguments);
  command.add_option("STATION", arguments->station, "only acts that concern this station, or all stations");
  command.add_option("--from-act", arguments->from, "first act");
  command.add_option("--to-act", arguments->to, "last act");
  command.add_flag("--rows", arguments->rows, "with the digest of the rows of each table");
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] { chosen.action = [arguments] { return ledger(*arguments); }; });
}

}  // namespace scourbook::cli
