#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/trace_report.hpp"

namespace scourbook::cli {
namespace {

struct TraceArguments : Arguments {
  std::string time, mean;
};

template <class Traced>
Exit report(const store::Book& book, const Traced& traced, const TraceArguments& arguments,
            UtcOffset offset) {
  if (arguments.json) {
    print(trace_json(book, traced, offset));
  } else {
    print(trace_text(book, traced, offset));
  }
  return traced.agrees() ? Exit::done : Exit::damaged;
}

Exit trace(const TraceArguments& arguments) {
  const auto book = store::Book::open_to_read(arguments.book);
  const Station station = station_of(book, arguments);
  const UtcOffset offset = station.clock.offset;
  publish::TraceRequest request;
  request.station = arguments.station;
  request.time = time_of(arguments.time, offset, "TIME");
  request.known = known_of(book, arguments, offset);
  request.edition = arguments.edition;
  request.data_version = arguments.data_version;
  const UtcOffset shown = shown_offset(station, arguments);
  if (arguments.mean.empty()) return report(book, publish::trace_value(book, request), arguments, shown);
  if (arguments.mean != "day") throw UsageError(fmt::format("--mean: \"{}\"; expected day", arguments.mean));
  // A date alone names the station day that starts on it, wherever in the day that is.
  if (arguments.time.size() == std::string("2020-01-31").size()) request.time += station.clock.day_start;
  return report(book, publish::trace_day(book, request), arguments, shown);
}

}  // namespace

void add_trace(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<TraceArguments>();
  CLI::App& command = *program.add_subcommand(
      "trace", "the chain behind one flow: reading, level, curve, survey, gaugings, people; computed again");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("TIME", arguments->time, "instant, or a date with --mean day")->required();
  command.add_option("--mean", arguments->mean, "day: the mean of the station day that holds TIME");
  add_view(command, *arguments);
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] { chosen.action = [arguments] { return trace(*arguments); }; });
}

}  // namespace scourbook::cli
