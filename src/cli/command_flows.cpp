#include <fmt/format.h>

#include <cmath>
#include <iostream>
#include <ostream>

#include "cli/commands.hpp"
#include "publish/rounding.hpp"
#include "publish/series.hpp"

namespace scourbook::cli {
namespace {

struct FlowsArguments : Arguments {
  std::string from, until, mean = "none";
  bool published = false;
};

publish::SeriesRequest request_of(const store::Book& book, const FlowsArguments& arguments,
                                  const Station& station) {
  if (arguments.published && (arguments.edition || arguments.data_version)) {
    throw UsageError("--published takes what was published; --edition and --data do not go with it");
  }
  publish::SeriesRequest request;
  request.station = arguments.station;
  request.from = time_of(arguments.from, station.clock.offset, "--from");
  request.until = time_of(arguments.until, station.clock.offset, "--until");
  if (request.until <= request.from) throw UsageError("--until is not after --from");
  const auto mean = publish::parse_mean_over(arguments.mean);
  if (!mean)
    throw UsageError(fmt::format("--mean: \"{}\"; expected day, month or water-year", arguments.mean));
  request.mean = *mean;
  request.published = arguments.published;
  request.known = known_of(book, arguments, station.clock.offset);
  request.edition = arguments.edition;
  request.data_version = arguments.data_version;
  return request;
}

Json head_json(const publish::SeriesHead& head) {
  Json json = {{"station", head.station.id}, {"mean", word(head.request.mean)}};
  json["published"] = head.request.published;
  if (head.request.published) {
    json["publications"] = head.publications;
  } else {
    json["edition"] = head.edition;
    json["data_version"] = head.data_version;
  }
  json["method_version"] = head.method;
  json["known_at_act"] = head.known_act;
  json["caution"] = publish::caution();
  return json;
}

Json row_json(const publish::SeriesRow& row, const publish::SeriesHead& head, UtcOffset offset) {
  Json json;
  json["time"] = format_time(row.time, offset);
  json["discharge_m3s"] = row.discharge_m3s ? Json(*row.discharge_m3s) : Json(nullptr);
  json["u95_pct"] = row.discharge_m3s ? Json(row.u95_pct) : Json(nullptr);
  json["quality"] = word(row.quality);
  json["curves"] = row.curves;
  json["surveys"] = Json::array();
  for (int curve : row.curves) {
    const auto at = static_cast<std::size_t>(curve);
    json["surveys"].push_back(at < head.survey_of_curve.size() ? head.survey_of_curve[at] : "");
  }
  json["flags"] = words(row.flags);
  if (head.request.mean != publish::MeanOver::none) json["share"] = row.share;
  return json;
}

void print_json(const store::Book& book, const publish::SeriesRequest& request, UtcOffset offset) {
  publish::SeriesHead head;
  bool first = true;
  const auto begin = [&](const publish::SeriesHead& given) {
    head = given;
    std::string text = head_json(head).dump(2);
    text.erase(text.size() - 2);  // the rows follow inside the object
    print(text + ",\n  \"values\": [");
  };
  publish::run_series(book, request, begin, [&](const publish::SeriesRow& row) {
    print((first ? "\n    " : ",\n    ") + row_json(row, head, offset).dump());
    first = false;
  });
  print(std::string(first ? "]\n}\n" : "\n  ]\n}\n"));
}

Exit flows(const FlowsArguments& arguments) {
  const auto book = store::Book::open_to_read(arguments.book);
  const Station station = station_of(book, arguments);
  const publish::SeriesRequest request = request_of(book, arguments, station);
  const UtcOffset offset = shown_offset(station, arguments);
  if (arguments.json) {
    print_json(book, request, offset);
    return Exit::done;
  }
  publish::write_csv(book, request, offset, std::cout);
  std::cout.flush();
  if (!std::cout)
    throw store::StoreError(store::StoreError::Kind::io, "cannot write the output; is the disk full?");
  return Exit::done;
}

}  // namespace

void add_flows(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<FlowsArguments>();
  CLI::App& command = *program.add_subcommand(
      "flows", "a flow series as CSV, with uncertainty, quality, curve, survey and flags of every value");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("--from", arguments->from, "begin of the range")->required();
  command.add_option("--until", arguments->until, "end of the range, excluded")->required();
  command.add_option("--mean", arguments->mean,
                     "mean over day, month or water-year instead of values at readings");
  command.add_flag("--published", arguments->published, "the figures as published");
  add_view(command, *arguments);
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] { chosen.action = [arguments] { return flows(*arguments); }; });
}

}  // namespace scourbook::cli
