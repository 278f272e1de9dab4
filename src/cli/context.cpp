#include "cli/context.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

#include <algorithm>
#include <charconv>
#include <cstdio>

namespace scourbook::cli {

store::ActHead Arguments::head() const {
  if (by.empty()) {
    throw UsageError("who does this? Say --by NAME, or set SCOURBOOK_BY; the ledger keeps it");
  }
  return {by, station, reason, command_line};
}

void add_book(CLI::App& command, Arguments& arguments) {
  command.add_option("BOOK", arguments.book, "the book, a file that ends in .scourbook")->required();
}

void add_station(CLI::App& command, Arguments& arguments) {
  command.add_option("STATION", arguments.station, "station")->required();
}

void add_json(CLI::App& command, Arguments& arguments) {
  command.add_flag("--json", arguments.json, "print JSON instead of tables");
}

void add_utc(CLI::App& command, Arguments& arguments) {
  command.add_flag("--utc", arguments.utc, "show times in UTC instead of the station's offset");
}

void add_writer(CLI::App& command, Arguments& arguments, const std::string& reason_help) {
  command.add_option("--by", arguments.by, "who does it; kept in the ledger")->envname("SCOURBOOK_BY");
  command.add_option("--reason", arguments.reason, reason_help);
}

void add_known_at(CLI::App& command, Arguments& arguments) {
  command.add_option("--known-at", arguments.known_at,
                     "answer from what the book held at this time, or after act N as act:N");
}

void add_view(CLI::App& command, Arguments& arguments) {
  add_known_at(command, arguments);
  command.add_option("--edition", arguments.edition, "this edition instead of the newest");
  command.add_option("--data", arguments.data_version, "this data version instead of the newest");
}

Station station_of(const store::Book& book, const Arguments& arguments, Known known) {
  if (auto found = book.station(arguments.station, known)) return found->value;
  std::vector<std::string> ids;
  for (const auto& stored : book.stations(known)) ids.push_back(stored.value.id);
  throw store::StoreError(
      store::StoreError::Kind::refused,
      ids.empty()
          ? fmt::format("the book has no station {}; it has none yet: take in a station file first",
                        arguments.station)
          : fmt::format("the book has no station {}; it has {}", arguments.station, fmt::join(ids, ", ")));
}

UtcOffset shown_offset(const Station& station, const Arguments& arguments) {
  return arguments.utc ? UtcOffset{} : station.clock.offset;
}

Instant time_of(const std::string& text, UtcOffset offset, const std::string& option) {
  const ParsedTime parsed = parse_time(text, offset);
  if (parsed.ok()) return parsed.time;
  throw UsageError(
      fmt::format("{}: \"{}\": {}; expected for example 2020-01-31T06:15, in the station's offset, or "
                  "with an offset of its own",
                  option, text, explain(parsed.fault)));
}

Known known_of(const store::Book& book, const Arguments& arguments, UtcOffset offset) {
  const std::string& text = arguments.known_at;
  if (text.empty()) return {};
  if (text.rfind("act:", 0) != 0) return book.known_at(time_of(text, offset, "--known-at"));
  std::int64_t number = 0;
  const char* end = text.data() + text.size();
  const auto [rest, fault] = std::from_chars(text.data() + 4, end, number);
  if (fault != std::errc{} || rest != end || number < 1) {
    throw UsageError(fmt::format("--known-at: \"{}\" is no act; expected for example act:12", text));
  }
  return Known{book.act(number).number};
}

history::View view_of(const store::Book& book, const Arguments& arguments, const Station& station) {
  const Known known = known_of(book, arguments, station.clock.offset);
  return history::view_of(book, arguments.station, known, arguments.edition, arguments.data_version);
}

void require_reason(const Arguments& arguments, const std::string& what) {
  if (arguments.reason.empty()) {
    throw UsageError(fmt::format("{} needs --reason TEXT; the ledger keeps it", what));
  }
}

void print(const std::string& text) {
  std::fwrite(text.data(), 1, text.size(), stdout);
}

void print(const Json& json) {
  print(json.dump(2) + "\n");
}

Json state_json(const store::Book& book, const history::View& view) {
  Json json;
  json["edition"] = view.edition ? Json(view.edition->number) : Json(nullptr);
  json["data_version"] = view.data_version;
  json["method_version"] = store::kMethodVersion;
  json["known_at_act"] = std::min(view.known.act, book.newest_act());
  return json;
}

std::string state_line(const store::Book& book, const history::View& view) {
  const std::string edition =
      view.edition ? fmt::format("edition {}", view.edition->number) : std::string("no edition yet");
  return fmt::format("{}, data version {}, method version {}, as known at act {}", edition, view.data_version,
                     store::kMethodVersion, std::min(view.known.act, book.newest_act()));
}

}  // namespace scourbook::cli
