#include <fmt/format.h>

#include <limits>

#include "cli/commands.hpp"

namespace scourbook::cli {
namespace {

struct NewArguments : Arguments {
  store::Settings settings;
};

Exit create(const NewArguments& arguments) {
  const std::string ending = ".scourbook";
  const std::string& path = arguments.book;
  if (path.size() <= ending.size() || path.compare(path.size() - ending.size(), ending.size(), ending) != 0) {
    throw UsageError(fmt::format("a book's name ends in {}; write {}{}", ending, path, ending));
  }
  (void)store::Book::create(path, arguments.head(), arguments.settings);
  print(fmt::format("made {}\n", path));
  return Exit::done;
}

void add_settings(CLI::App& command, store::Settings& settings) {
  const double huge = std::numeric_limits<double>::max();
  command
      .add_option("--longest-gap", settings.longest_gap_minutes,
                  "minutes; readings further apart have no flow between them")
      ->check(CLI::Range(1, 525600))
      ->capture_default_str();
  command
      .add_option("--published-digits", settings.published_digits, "significant digits of a published flow")
      ->check(CLI::Range(1, 9))
      ->capture_default_str();
  command
      .add_option("--published-decimals", settings.published_decimals, "and at most so many decimals, m3/s")
      ->check(CLI::Range(0, 6))
      ->capture_default_str();
  command
      .add_option("--least-share-of-day", settings.least_share_of_day,
                  "a mean over a smaller share of the day is not given")
      ->check(CLI::Range(0.01, 1.0))
      ->capture_default_str();
  command
      .add_option("--estimate-above", settings.estimate_above_gauged,
                  "times the curve's largest gauging: quality estimate above it")
      ->check(CLI::Range(1.0, huge))
      ->capture_default_str();
  command
      .add_option("--poor-above", settings.poor_above_lineage,
                  "times the largest gauging of the lineage: quality poor above it")
      ->check(CLI::Range(1.0, huge))
      ->capture_default_str();
}

}  // namespace

void add_new(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<NewArguments>();
  CLI::App& command = *program.add_subcommand("new", "create a book");
  add_book(command, *arguments);
  add_writer(command, *arguments, "what the book is for");
  add_settings(command, arguments->settings);
  command.callback([&chosen, arguments] {
    arguments->command_line = chosen.command_line;
    chosen.action = [arguments] { return create(*arguments); };
  });
}

}  // namespace scourbook::cli
