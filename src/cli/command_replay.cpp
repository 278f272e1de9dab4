#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/progress.hpp"
#include "replay/replay.hpp"

namespace scourbook::cli {
namespace {

struct ReplayArguments : Arguments {
  std::string from, until;
};

/// The station days of the whole record where the range is not given.
std::pair<Instant, Instant> range_of(const store::Book& book, const ReplayArguments& arguments,
                                     const Station& station, Known data) {
  const auto span = book.stage_span(arguments.station, data);
  if (!span) {
    throw store::StoreError(
        store::StoreError::Kind::refused,
        fmt::format("{} has no stage yet; take in a stage file first", arguments.station));
  }
  const StationClock& clock = station.clock;
  const StationDay last = day_of(span->second, clock);
  const Instant from = arguments.from.empty() ? start_of(day_of(span->first, clock), clock)
                                              : time_of(arguments.from, clock.offset, "--from");
  const Instant until = arguments.until.empty() ? start_of(StationDay{last.number + 1}, clock)
                                                : time_of(arguments.until, clock.offset, "--until");
  if (until <= from) throw UsageError("--until is not after --from");
  return {from, until};
}

Json replay_json(const store::ReplayRecord& record, UtcOffset offset) {
  Json json = {{"replay", record.number},
               {"station", record.station},
               {"act", record.act},
               {"edition", record.edition},
               {"data_version", record.data_version},
               {"method_version", record.method},
               {"from", format_time(record.from, offset)},
               {"until", format_time(record.until, offset)},
               {"months", Json::array()}};
  for (const auto& month : record.months) {
    json["months"].push_back(
        {{"month_utc", format_month(month.month)}, {"values", month.values}, {"sha256", month.sha256}});
  }
  return json;
}

std::string replay_text(const store::ReplayRecord& record, UtcOffset offset) {
  std::int64_t values = 0;
  for (const auto& month : record.months) values += month.values;
  return fmt::format(
      "replay {} of {}: {} to {}\n"
      "  edition {}, data version {}, method version {}\n"
      "  {} readings in {} months (UTC), each month with its digest; act {}\n"
      "  publish it: scourbook publish BOOK {} {} --reason TEXT\n",
      record.number, record.station, format_time(record.from, offset), format_time(record.until, offset),
      record.edition, record.data_version, record.method, values, record.months.size(), record.act,
      record.station, record.number);
}

Exit run_replay(const ReplayArguments& arguments) {
  const store::ActHead head = arguments.head();
  auto book = store::Book::open_to_write(arguments.book);
  const Station station = station_of(book, arguments);
  const history::View view = view_of(book, arguments, station);
  const auto [from, until] = range_of(book, arguments, station, Known{view.data_version});
  store::ReplayRecord record;
  {
    Progress progress("computing flows");
    record = replay::make_replay(book, view, from, until,
                                 [&](std::int64_t done, std::int64_t all) { progress.show(done, all); });
  }
  auto writer = book.begin(head);
  record = writer.add_replay(record);
  record.act = writer.commit().number;
  const UtcOffset offset = shown_offset(station, arguments);
  if (arguments.json) {
    print(replay_json(record, offset));
  } else {
    print(replay_text(record, offset));
  }
  return Exit::done;
}

}  // namespace

void add_replay(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<ReplayArguments>();
  CLI::App& command = *program.add_subcommand(
      "replay",
      "compute the flows of a range, each from the curve valid at its time, and keep their digests");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("--from", arguments->from,
                     "begin of the range; the day of the first reading where not given");
  command.add_option("--until", arguments->until,
                     "end of the range, excluded; the end of the last reading's day where not given");
  add_view(command, *arguments);
  add_writer(command, *arguments, "why, for the ledger");
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] {
    arguments->command_line = chosen.command_line;
    chosen.action = [arguments] { return run_replay(*arguments); };
  });
}

}  // namespace scourbook::cli
