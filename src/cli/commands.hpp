#pragma once
// The commands; each adds itself to the program.

#include <CLI/CLI.hpp>

#include "cli/context.hpp"

namespace scourbook::cli {

/// What a parsed command does, set by the command that was named.
struct Chosen {
  std::string command_line;
  std::function<Exit()> action;
};

void add_new(CLI::App& program, Chosen& chosen);
void add_take(CLI::App& program, Chosen& chosen);
void add_derive(CLI::App& program, Chosen& chosen);
void add_adopt(CLI::App& program, Chosen& chosen);
void add_history(CLI::App& program, Chosen& chosen);
void add_curve(CLI::App& program, Chosen& chosen);
void add_replay(CLI::App& program, Chosen& chosen);
void add_publish(CLI::App& program, Chosen& chosen);
void add_flows(CLI::App& program, Chosen& chosen);
void add_trace(CLI::App& program, Chosen& chosen);
void add_check(CLI::App& program, Chosen& chosen);
void add_ledger(CLI::App& program, Chosen& chosen);

}  // namespace scourbook::cli
