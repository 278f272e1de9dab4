#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/curve_report.hpp"
#include "cli/table.hpp"
#include "history/derivation_input.hpp"
#include "publish/series.hpp"
#include "rederivation/derive.hpp"

namespace scourbook::cli {
namespace {

struct DeriveArguments : Arguments {
  std::string survey, from, until, hold = "velocity-scale";
  std::optional<int> descends_from;
  bool first = false, without_gaugings = false, rescale = false;
  std::vector<std::string> carry, leave_out;
};

HoldPolicy hold_of(const std::string& text) {
  for (const HoldPolicy policy : {HoldPolicy::velocity_scale, HoldPolicy::carried}) {
    if (text == word(policy)) return policy;
  }
  throw UsageError(fmt::format("--hold: \"{}\"; expected velocity-scale or carried", text));
}

history::DerivationRequest request_of(const DeriveArguments& arguments, const Station& station) {
  history::DerivationRequest request;
  request.station = arguments.station;
  request.survey = arguments.survey;
  request.from = time_of(arguments.from, station.clock.offset, "--from");
  if (!arguments.until.empty()) {
    request.until = time_of(arguments.until, station.clock.offset, "--until");
    if (*request.until <= request.from) throw UsageError("--until is not after --from");
  }
  if (arguments.first && arguments.descends_from) {
    throw UsageError("--first starts a lineage of its own; --descends-from does not go with it");
  }
  request.descends_from = arguments.descends_from;
  request.first = arguments.first;
  request.options.hold = hold_of(arguments.hold);
  request.options.carry = arguments.carry;
  request.options.leave_out = arguments.leave_out;
  request.options.without_gaugings = arguments.without_gaugings;
  request.options.rescale = arguments.rescale;
  return request;
}

Exit refuse(const std::vector<std::string>& refusals, const Arguments& arguments) {
  if (arguments.json) {
    print(Json{{"curve", nullptr}, {"refusals", refusals}});
  } else {
    std::string text = "no curve was derived:\n";
    for (const auto& refusal : refusals) text += wrapped(refusal);
    std::fputs(text.c_str(), stderr);
  }
  return Exit::refused;
}

Json derivation_json(const RatingCurve& curve, const Before& before, const std::vector<std::string>& notes,
                     UtcOffset offset) {
  Json json = curve_head_json(curve, offset);
  json["curves"] = Json::array({curve.number});
  json["state"] = "proposed";
  json["notes"] = notes;
  json["controls"] = controls_json(curve, before);
  json["gaugings"] = gaugings_json(curve);
  json["diagnostics"] = diagnostics_json(curve);
  json["caution"] = publish::caution();
  return json;
}

std::string derivation_text(const RatingCurve& curve, const Before& before,
                            const std::vector<std::string>& notes, UtcOffset offset, std::int64_t act) {
  std::string text = curve_head_text(curve, offset);
  for (const auto& note : notes) text += wrapped(note);
  text += remarks_text(curve) + "\n" + controls_text(curve, before) + "\n" + gaugings_text(curve) + "\n" +
          diagnostics_text(curve);
  const std::string until = curve.until ? fmt::format(" --until {}", format_time(*curve.until, offset)) : "";
  text += fmt::format(
      "\nstored as a proposal, act {}; put it in force: scourbook adopt BOOK {} {} --from {}{} --reason "
      "TEXT\n",
      act, curve.station, curve.number, format_time(curve.from, offset), until);
  return text + publish::caution() + "\n";
}

Exit derive(const DeriveArguments& arguments) {
  const store::ActHead head = arguments.head();
  auto book = store::Book::open_to_write(arguments.book);
  const Station station = station_of(book, arguments);
  const auto collected = history::collect(book, request_of(arguments, station));
  if (!collected.refusals.empty()) return refuse(collected.refusals, arguments);
  const rederivation::Result result = rederivation::derive(collected.input);
  if (result.status != rederivation::Status::ok) return refuse(result.refusals, arguments);
  auto writer = book.begin(head);
  const RatingCurve curve = writer.add_curve(result.curve);
  const std::int64_t act = writer.commit().number;
  const UtcOffset offset = shown_offset(station, arguments);
  if (arguments.json) {
    print(derivation_json(curve, result.before, collected.notes, offset));
  } else {
    print(derivation_text(curve, result.before, collected.notes, offset, act));
  }
  return Exit::done;
}

}  // namespace

void add_derive(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<DeriveArguments>();
  CLI::App& command = *program.add_subcommand(
      "derive",
      "derive a curve from a survey, the curve before it and the gaugings of the period; stores a proposal");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("--survey", arguments->survey, "id of the survey")->required();
  command.add_option("--from", arguments->from, "begin of the period; gaugings inside it are used")
      ->required();
  command.add_option("--until", arguments->until, "end of the period, excluded; open where not given");
  command.add_option("--descends-from", arguments->descends_from,
                     "curve that it descends from; the one in force before where not given");
  command.add_flag("--first", arguments->first, "start a lineage of its own");
  command.add_flag("--without-gaugings", arguments->without_gaugings, "from the survey alone");
  command.add_option("--leave-out", arguments->leave_out, "gaugings not to be used, by id")->delimiter(',');
  command.add_option("--carry", arguments->carry, "controls that may keep the survey of the curve before")
      ->delimiter(',');
  command
      .add_option("--hold", arguments->hold,
                  "velocity-scale: exactly; carried: the parent's posterior is the prior")
      ->capture_default_str();
  command.add_flag(
      "--rescale", arguments->rescale,
      "slope, roughness, meandering or coefficient changed by the reach file: scale v1 by the rows");
  add_writer(command, *arguments, "why, for the ledger");
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] {
    arguments->command_line = chosen.command_line;
    chosen.action = [arguments] { return derive(*arguments); };
  });
}

}  // namespace scourbook::cli
