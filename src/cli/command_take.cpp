#include <fmt/format.h>
#include <fmt/ranges.h>

#include "cli/commands.hpp"
#include "cli/progress.hpp"
#include "cli/table.hpp"
#include "cli/touched.hpp"
#include "fieldfile/take.hpp"

namespace scourbook::cli {
namespace {

struct TakeArguments : Arguments {
  std::vector<std::string> files;
  bool correct = false;
};

Json finding_json(const Finding& finding) {
  return {{"file", finding.file},   {"line", finding.line},   {"column", finding.column},
          {"text", finding.text},   {"fault", finding.fault}, {"expected", finding.expected},
          {"to_do", finding.remedy}};
}

Json taken_json(const fieldfile::Taken& taken, const std::vector<std::string>& touched) {
  Json json;
  json["act"] = taken.findings.empty() ? Json(taken.act) : Json(nullptr);
  json["files"] = Json::array();
  for (const auto& file : taken.files) {
    json["files"].push_back({{"file", file.file},
                             {"kind", file.kind},
                             {"rows", file.rows},
                             {"stored", file.stored},
                             {"repeated", file.repeated},
                             {"stations", file.stations},
                             {"remarks", file.remarks}});
  }
  json["touched"] = touched;
  json["findings"] = Json::array();
  for (const Finding& finding : taken.findings) json["findings"].push_back(finding_json(finding));
  return json;
}

std::string taken_text(const fieldfile::Taken& taken, const std::vector<std::string>& touched) {
  Table table({{"file"},
               {"kind"},
               {"rows", Align::right},
               {"stored", Align::right},
               {"held already", Align::right},
               {"stations"}});
  std::string remarks;
  for (const auto& file : taken.files) {
    table.add({file.file, file.kind, std::to_string(file.rows), std::to_string(file.stored),
               std::to_string(file.repeated), fmt::format("{}", fmt::join(file.stations, ", "))});
    for (const auto& remark : file.remarks) remarks += wrapped(file.file + ": " + remark, 0);
  }
  const std::string act = taken.act > 0 ? fmt::format("act {}\n", taken.act)
                                        : std::string("nothing new; the book is as it was\n");
  for (const auto& sentence : touched) remarks += wrapped("! " + sentence, 0);
  return table.text(0) + remarks + act;
}

Exit take(const TakeArguments& arguments) {
  if (arguments.correct) require_reason(arguments, "take --correct");
  const store::ActHead head = arguments.head();
  auto book = store::Book::open_to_write(arguments.book);
  fieldfile::TakeOptions options;
  options.who = head.who;
  options.command = head.command;
  options.reason = head.reason;
  options.correct = arguments.correct;
  fieldfile::Taken taken;
  {
    Progress progress("taking in");
    options.progress = [&](std::int64_t done, std::int64_t all) { progress.show(done, all); };
    taken = fieldfile::take(book, arguments.files, options);
  }
  const auto touched = taken.findings.empty() ? touched_by(book, taken) : std::vector<std::string>{};
  if (arguments.json) print(taken_json(taken, touched));
  if (!taken.findings.empty()) {
    if (!arguments.json) {
      std::fputs((describe(taken.findings) + "nothing was stored\n").c_str(), stderr);
    }
    return Exit::bad_input;
  }
  if (!arguments.json) print(taken_text(taken, touched));
  return Exit::done;
}

}  // namespace

void add_take(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<TakeArguments>();
  CLI::App& command = *program.add_subcommand(
      "take",
      "take in field files: stations, gauge zero, reaches, surveys, gaugings, stage, stage corrections");
  add_book(command, *arguments);
  command
      .add_option("FILE", arguments->files, "CSV files, also .gz; their kind is recognised by their columns")
      ->required();
  command.add_flag("--correct", arguments->correct, "held records get new versions; needs --reason");
  add_writer(command, *arguments, "why, for the ledger");
  add_json(command, *arguments);
  command.callback([&chosen, arguments] {
    arguments->command_line = chosen.command_line;
    chosen.action = [arguments] { return take(*arguments); };
  });
}

}  // namespace scourbook::cli
