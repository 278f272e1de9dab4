#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/progress.hpp"
#include "publish/publication.hpp"
#include "publish/series.hpp"

namespace scourbook::cli {
namespace {

struct PublishArguments : Arguments {
  int replay = 0;
  std::string title;
};

struct Counts {
  std::int64_t values = 0, days = 0, without = 0;
};

Counts counts_of(const store::Publication& publication) {
  Counts counts;
  for (const auto& month : publication.months)
    counts.values += static_cast<std::int64_t>(month.time_ms.size());
  for (const auto& day : publication.days) {
    ++counts.days;
    if (!day.mean) ++counts.without;
  }
  return counts;
}

Json publication_json(const store::Publication& publication, const Counts& counts, UtcOffset offset) {
  return {{"publication", publication.number},
          {"station", publication.station},
          {"act", publication.act},
          {"replay", publication.replay},
          {"from", format_time(publication.from, offset)},
          {"until", format_time(publication.until, offset)},
          {"values", counts.values},
          {"days", counts.days},
          {"days_without_mean", counts.without},
          {"title", publication.title},
          {"sha256", publication.sha256},
          {"caution", publish::caution()}};
}

std::string publication_text(const store::Publication& publication, const Counts& counts, UtcOffset offset) {
  return fmt::format(
      "publication {} of {}: {} to {}, from replay {}; act {}\n"
      "  {} values, {} day means ({} days without)\n"
      "  sha256 {}\n"
      "  {}\n",
      publication.number, publication.station, format_time(publication.from, offset),
      format_time(publication.until, offset), publication.replay, publication.act, counts.values, counts.days,
      counts.without, publication.sha256, publish::caution());
}

Exit run_publish(const PublishArguments& arguments) {
  require_reason(arguments, "publish");
  const store::ActHead head = arguments.head();
  auto book = store::Book::open_to_write(arguments.book);
  const Station station = station_of(book, arguments);
  const auto replay = book.replay(arguments.station, arguments.replay);
  if (!replay) {
    throw store::StoreError(store::StoreError::Kind::refused,
                            fmt::format("{} has no replay {}; it has {}", arguments.station, arguments.replay,
                                        book.replays(arguments.station).size()));
  }
  store::Publication publication;
  {
    Progress progress("computing figures");
    publication = publish::make_publication(
        book, *replay, [&](std::int64_t done, std::int64_t all) { progress.show(done, all); });
  }
  publication.title = arguments.title;
  publication.note = arguments.reason;
  auto writer = book.begin(head);
  publication = writer.add_publication(std::move(publication));
  publication.act = writer.commit().number;
  const UtcOffset offset = shown_offset(station, arguments);
  if (arguments.json) {
    print(publication_json(publication, counts_of(publication), offset));
  } else {
    print(publication_text(publication, counts_of(publication), offset));
  }
  return Exit::done;
}

}  // namespace

void add_publish(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<PublishArguments>();
  CLI::App& command = *program.add_subcommand("publish", "make a replay a publication: rounded, immutable");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("REPLAY", arguments->replay, "number of the replay")->required();
  command.add_option("--title", arguments->title, "title of the publication");
  add_writer(command, *arguments, "why it is published; required");
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] {
    arguments->command_line = chosen.command_line;
    chosen.action = [arguments] { return run_publish(*arguments); };
  });
}

}  // namespace scourbook::cli
