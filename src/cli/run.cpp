#include "cli/run.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

#include <cstdio>
#include <new>

#include "cli/commands.hpp"
#include "publish/series.hpp"
#include "terms/finding.hpp"
#include "terms/nearest.hpp"

namespace scourbook::cli {
namespace {

/// The words as typed, quoted where a shell would need it.
std::string command_line_of(int argc, char** argv) {
  std::string line = "scourbook";
  for (int i = 1; i < argc; ++i) {
    const std::string word = argv[i];
    const bool plain =
        !word.empty() && word.find_first_of(" \t\n\"'\\$`*?;&|<>()#~!{}[]") == std::string::npos;
    std::string quoted;
    for (char c : word) quoted += c == '\'' ? std::string("'\\''") : std::string(1, c);
    line += plain ? " " + word : " '" + quoted + "'";
  }
  return line;
}

int say(const char* what, const std::string& why, Exit exit) {
  std::fflush(stdout);
  fmt::print(stderr, "{}{}\n", what, why);
  return static_cast<int>(exit);
}

int status_of(store::StoreError::Kind kind) {
  using Kind = store::StoreError::Kind;
  return static_cast<int>(kind == Kind::damaged || kind == Kind::newer ? Exit::damaged : Exit::refused);
}

/// What to say where the first word is no command; nothing where it is one, or an option.
std::optional<std::string> unknown_command(const CLI::App& program, int argc, char** argv) {
  if (argc < 2 || argv[1][0] == '-') return {};
  std::vector<std::string> names;
  for (const CLI::App* command : program.get_subcommands([](const CLI::App*) { return true; })) {
    if (command->get_name() == argv[1]) return {};
    names.push_back(command->get_name());
  }
  const std::string near = nearest_word(argv[1], names);
  return fmt::format("there is no command {}{}; the commands are {}", in_quotes(argv[1]),
                     near.empty() ? "" : "; did you mean " + near + "?", fmt::join(names, ", "));
}

int act_on(const Chosen& chosen) {
  try {
    const Exit exit = chosen.action();
    if (std::fflush(stdout) != 0) return say("cannot write the output: ", "is the disk full?", Exit::refused);
    return static_cast<int>(exit);
  } catch (const UsageError& error) {
    return say("", error.what(), Exit::bad_input);
  } catch (const store::StoreError& error) {
    (void)say("", error.what(), Exit::refused);
    return status_of(error.kind());
  } catch (const std::bad_alloc&) {
    return say("", "not enough memory for this", Exit::refused);
  }
}

}  // namespace

int run(int argc, char** argv) {
  CLI::App program(
      "Scourbook keeps the history of stage-discharge curves: which curve was valid when, the survey and "
      "gaugings "
      "behind it, and the flows computed through it.");
  program.name("scourbook");
  program.require_subcommand(1);
  program.set_version_flag("--version", "scourbook " + store::program_version());
  program.footer(
      publish::caution() +
      "\nExit status: 0 done, 1 does not exist or is not allowed, 2 bad input or usage, 3 the book is "
      "damaged or from a newer program.");
  Chosen chosen;
  chosen.command_line = command_line_of(argc, argv);
  for (const auto add : {add_new, add_take, add_derive, add_adopt, add_history, add_curve, add_replay,
                         add_publish, add_flows, add_trace, add_check, add_ledger}) {
    add(program, chosen);
  }
  if (const auto unknown = unknown_command(program, argc, argv)) return say("", *unknown, Exit::bad_input);
  try {
    program.parse(argc, argv);
  } catch (const CLI::ParseError& error) {
    return program.exit(error) == 0 ? 0 : static_cast<int>(Exit::bad_input);
  }
  return act_on(chosen);
}

}  // namespace scourbook::cli
