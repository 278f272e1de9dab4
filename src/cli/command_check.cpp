#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/progress.hpp"
#include "publish/check.hpp"

namespace scourbook::cli {
namespace {

struct CheckArguments : Arguments {
  bool rederive = false;
};

Json report_json(const publish::CheckReport& report, bool rederive) {
  Json json = {{"sound", report.damage.empty()},      {"acts", report.acts},
               {"replays", report.replays},           {"replay_months", report.replay_months},
               {"publications", report.publications}, {"published_values", report.published_values}};
  if (rederive) {
    json["curves_rederived"] = report.curves;
    json["largest_rederivation_gap_ln"] = report.largest_rederivation_gap;
  }
  json["damage"] = Json::array();
  for (const auto& damage : report.damage) {
    json["damage"].push_back({{"table", damage.table}, {"act", damage.act}, {"text", damage.text}});
  }
  json["out_of_date"] = report.out_of_date;
  return json;
}

std::string report_text(const publish::CheckReport& report, bool rederive) {
  std::string text;
  for (const auto& damage : report.damage) {
    const std::string act = damage.act > 0 ? fmt::format(", act {}", damage.act) : "";
    const std::string where = damage.table.empty() ? "" : fmt::format("{}{}: ", damage.table, act);
    text += fmt::format("DAMAGE {}{}\n", where, damage.text);
  }
  for (const auto& reason : report.out_of_date) text += fmt::format("out of date: {}\n", reason);
  text += fmt::format("{} acts: chain and digests of all rows computed again\n", report.acts);
  text +=
      fmt::format("{} replays: {} months of flows computed again\n", report.replays, report.replay_months);
  text += fmt::format("{} publications: {} figures computed again\n", report.publications,
                      report.published_values);
  if (rederive) {
    text += fmt::format("{} curves derived again; largest gap of ln Q {:.1e}\n", report.curves,
                        report.largest_rederivation_gap);
  }
  if (report.damage.empty()) return text + "the book is sound\n";
  return text +
         fmt::format(
             "THE BOOK IS DAMAGED: {} contradictions. Do not write to it; keep a copy, and go back to a "
             "backup that checks as sound.\n",
             report.damage.size());
}

Exit check(const CheckArguments& arguments) {
  const auto book = store::Book::open_to_read(arguments.book);
  publish::CheckOptions options;
  options.rederive = arguments.rederive;
  publish::CheckReport report;
  {
    Progress progress("checking");
    options.progress = [&](const std::string& what, std::int64_t done, std::int64_t all) {
      progress.show(what, done, all);
    };
    report = publish::check(book, options);
  }
  if (arguments.json) {
    print(report_json(report, arguments.rederive));
  } else {
    print(report_text(report, arguments.rederive));
  }
  return report.damage.empty() ? Exit::done : Exit::damaged;
}

}  // namespace

void add_check(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<CheckArguments>();
  CLI::App& command =
      *program.add_subcommand("check", "compute ledger, digests, replays and publications again");
  add_book(command, *arguments);
  command.add_flag("--rederive", arguments->rederive, "derive every curve again as well");
  add_json(command, *arguments);
  command.callback([&chosen, arguments] { chosen.action = [arguments] { return check(*arguments); }; });
}

}  // namespace scourbook::cli
