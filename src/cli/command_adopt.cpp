#include <fmt/format.h>

#include "cli/commands.hpp"
#include "cli/edition_report.hpp"
#include "cli/period_words.hpp"
#include "cli/table.hpp"
#include "publish/effect.hpp"

namespace scourbook::cli {
namespace {

struct AdoptArguments : Arguments {
  std::string curve, from, until, blend;
  std::vector<std::string> periods;
  std::optional<int> like, onto;
  bool replace = false, only_try = false;
};

using Kind = store::StoreError::Kind;

std::vector<history::Adoption> adoptions_of(const AdoptArguments& arguments, UtcOffset offset) {
  const bool short_form = !arguments.curve.empty();
  if (short_form + !arguments.periods.empty() + arguments.like.has_value() != 1) {
    throw UsageError(
        "say what is adopted: either CURVE --from TIME, or --period once or more, or --like EDITION");
  }
  std::vector<history::Adoption> all;
  for (const auto& text : arguments.periods) all.push_back(adoption_of(text, offset));
  if (!short_form) {
    if (!arguments.from.empty() || !arguments.until.empty() || !arguments.blend.empty()) {
      throw UsageError("--from, --until and --blend go with CURVE; in --period they stand inside");
    }
    return all;
  }
  if (arguments.from.empty()) throw UsageError("CURVE needs --from TIME");
  history::Adoption one;
  read_curve_word(arguments.curve, one.period);
  one.period.from = time_of(arguments.from, offset, "--from");
  read_until_word(arguments.until, offset, "--until", one);
  if (!arguments.blend.empty()) one.period.blend = blend_of(arguments.blend);
  return {one};
}

void require_curves(const store::Book& book, const std::string& station,
                    const std::vector<history::Adoption>& adoptions) {
  for (const auto& adoption : adoptions) {
    if (!adoption.period.curve || book.curve(station, *adoption.period.curve)) continue;
    const auto curves = book.curves(station);
    throw store::StoreError(
        Kind::refused, fmt::format("{} has no curve {}; {}", station, *adoption.period.curve,
                                   curves.empty() ? std::string("none was derived yet")
                                                  : fmt::format("its newest is {}", curves.back().number)));
  }
}

void require_seen(const std::optional<Edition>& newest, const AdoptArguments& arguments) {
  if (!arguments.onto) return;
  const int number = newest ? newest->number : 0;
  if (number == *arguments.onto) return;
  throw store::StoreError(
      Kind::refused,
      fmt::format("the newest edition of {} is {}, not {}; look at it first: scourbook history BOOK {} "
                  "--changes",
                  arguments.station, number, *arguments.onto, arguments.station));
}

/// Everything of edition `like` again.
history::AdoptResult restored(const store::Book& book, const AdoptArguments& arguments) {
  const auto like = book.edition(arguments.station, *arguments.like);
  if (!like) {
    throw store::StoreError(Kind::refused,
                            fmt::format("{} has no edition {}", arguments.station, *arguments.like));
  }
  history::AdoptResult result;
  result.periods = like->periods;
  return result;
}

std::vector<std::string> warnings_of(const store::Book& book, const std::string& station,
                                     const std::vector<history::Adoption>& adoptions) {
  std::vector<std::string> warnings;
  for (const auto& adoption : adoptions) {
    if (!adoption.period.curve) continue;
    const auto curve = book.curve(station, *adoption.period.curve);
    for (const auto& reason : history::out_of_date(book, *curve)) {
      warnings.push_back(fmt::format("curve {} is out of date: {}", curve->number, reason));
    }
    for (const auto& remark : curve->remarks) {
      warnings.push_back(fmt::format("curve {}: {}", curve->number, remark));
    }
  }
  return warnings;
}

Json stretch_json(const publish::StretchEffect& s, UtcOffset offset) {
  Json json = {{"from", format_time(s.from, offset)}, {"until", format_time(s.until, offset)}};
  json["curve"] = s.curve ? Json(*s.curve) : Json(nullptr);
  json["days"] = s.days;
  json["published_days"] = s.published_days;
  json["changed_days"] = s.changed_days;
  json["days_beyond_5_pct"] = s.beyond_5_pct;
  json["days_beyond_10_pct"] = s.beyond_10_pct;
  json["days_appeared"] = s.appeared;
  json["days_disappeared"] = s.disappeared;
  json["volume_change_pct"] = s.volume_change_pct ? Json(*s.volume_change_pct) : Json(nullptr);
  json["largest_change_pct"] = s.largest_change_pct ? Json(*s.largest_change_pct) : Json(nullptr);
  json["largest_on"] = s.largest_change_pct ? Json(format_day(s.largest_on)) : Json(nullptr);
  return json;
}

std::string effect_text(const publish::Effect& effect, UtcOffset offset) {
  std::string text = "what it would change in day means (published ones where there are any)\n";
  Table table({{"from"},
               {"until"},
               {"curve"},
               {"days", Align::right},
               {"published", Align::right},
               {"changed", Align::right},
               {"over 5 %", Align::right},
               {"over 10 %", Align::right},
               {"volume", Align::right},
               {"largest", Align::right},
               {"on"}});
  for (const auto& s : effect.stretches) {
    table.add({format_time(s.from, offset), format_time(s.until, offset),
               s.curve ? std::to_string(*s.curve) : std::string("none"), std::to_string(s.days),
               std::to_string(s.published_days), std::to_string(s.changed_days),
               std::to_string(s.beyond_5_pct), std::to_string(s.beyond_10_pct),
               s.volume_change_pct ? fmt::format("{:+.1f} %", *s.volume_change_pct) : std::string(),
               s.largest_change_pct ? fmt::format("{:+.1f} %", *s.largest_change_pct) : std::string(),
               s.largest_change_pct ? format_day(s.largest_on) : std::string()});
  }
  text += table.text();
  for (const auto& s : effect.stretches) {
    if (s.appeared + s.disappeared == 0) continue;
    text += fmt::format("  from {}: {} days get a mean that had none, {} lose theirs\n",
                        format_time(s.from, offset), s.appeared, s.disappeared);
  }
  for (int number : effect.publications) text += fmt::format("  publication {} holds changed days\n", number);
  return text;
}

struct Plan {
  std::optional<Edition> newest;
  std::vector<history::Adoption> adoptions;
  history::AdoptResult result;
  std::vector<std::string> warnings;
};

Plan plan_of(const store::Book& book, const AdoptArguments& arguments, const Station& station,
             UtcOffset offset) {
  Plan plan;
  plan.adoptions = adoptions_of(arguments, station.clock.offset);
  require_curves(book, arguments.station, plan.adoptions);
  plan.newest = book.newest_edition(arguments.station);
  require_seen(plan.newest, arguments);
  const std::vector<Period> before = plan.newest ? plan.newest->periods : std::vector<Period>{};
  plan.result = arguments.like ? restored(book, arguments)
                               : history::adopt(before, plan.adoptions, arguments.replace, offset);
  plan.warnings = warnings_of(book, arguments.station, plan.adoptions);
  return plan;
}

std::string removed_text(const history::AdoptResult& result, UtcOffset offset) {
  std::string text;
  for (const auto& removed : result.removed) {
    text +=
        fmt::format("{} {} from {} to {}\n",
                    removed.whole ? "gone as a whole:" : "cut off:", history::describe_holder(removed.part),
                    format_time(removed.part.from, offset), end_text(removed.part.until, offset));
  }
  for (const auto& note : result.notes) text += wrapped(note, 0);
  return text;
}

Exit refuse(const Plan& plan, const AdoptArguments& arguments, UtcOffset offset) {
  if (arguments.json) {
    print(Json{{"edition", nullptr}, {"refusals", plan.result.refusals}});
  } else {
    std::string text = "nothing was adopted:\n";
    for (const auto& refusal : plan.result.refusals) text += wrapped(refusal);
    std::fputs((text + removed_text(plan.result, offset)).c_str(), stderr);
  }
  return Exit::refused;
}

Exit only_try(const store::Book& book, const Plan& plan, const AdoptArguments& arguments, UtcOffset offset) {
  const auto view = history::view_of(book, arguments.station);
  auto adopted = plan.adoptions;
  if (arguments.like) {
    for (const Period& period : plan.result.periods) adopted.push_back({period, !period.until});
  }
  const publish::Effect effect = publish::effect_of(book, view, plan.result.periods, adopted);
  const std::vector<Period> before = plan.newest ? plan.newest->periods : std::vector<Period>{};
  const auto changes = changes_between(before, plan.result.periods);
  if (arguments.json) {
    Json json = {{"tried", true},
                 {"periods", periods_json(book, arguments.station, plan.result.periods, offset)},
                 {"changes", changes_json(changes, offset)},
                 {"notes", plan.result.notes},
                 {"warnings", plan.warnings},
                 {"effect", Json::array()},
                 {"publications_touched", effect.publications}};
    for (const auto& stretch : effect.stretches) json["effect"].push_back(stretch_json(stretch, offset));
    print(json);
    return Exit::done;
  }
  std::string text = "tried only, nothing was written; the periods would be\n";
  text += periods_text(book, arguments.station, plan.result.periods, offset);
  text += "changes\n" + changes_text(changes, offset) + removed_text(plan.result, offset);
  for (const auto& warning : plan.warnings) text += wrapped("! " + warning, 0);
  print(text + effect_text(effect, offset));
  return Exit::done;
}

Exit adopt(const AdoptArguments& arguments) {
  if (!arguments.only_try) require_reason(arguments, "adopt");
  auto book = arguments.only_try ? store::Book::open_to_read(arguments.book)
                                 : store::Book::open_to_write(arguments.book);
  const Station station = station_of(book, arguments);
  const UtcOffset offset = shown_offset(station, arguments);
  if (arguments.only_try) {
    const Plan plan = plan_of(book, arguments, station, offset);
    return plan.result.refusals.empty() ? only_try(book, plan, arguments, offset)
                                        : refuse(plan, arguments, offset);
  }
  // Planned under the write lock, so that the edition it is cut out of is still the newest when it is stored.
  auto writer = book.begin(arguments.head());
  const Plan plan = plan_of(book, arguments, station, offset);
  if (!plan.result.refusals.empty()) return refuse(plan, arguments, offset);
  Edition edition;
  edition.station = arguments.station;
  if (plan.newest) edition.parent = plan.newest->number;
  edition.periods = plan.result.periods;
  edition = writer.add_edition(std::move(edition));
  edition.act = writer.commit().number;
  if (arguments.json) {
    print(Json{{"edition", edition.number},
               {"act", edition.act},
               {"periods", periods_json(book, arguments.station, edition.periods, offset)},
               {"notes", plan.result.notes},
               {"warnings", plan.warnings}});
    return Exit::done;
  }
  std::string text =
      fmt::format("edition {} of {}, act {}\n", edition.number, arguments.station, edition.act);
  text += periods_text(book, arguments.station, edition.periods, offset) + removed_text(plan.result, offset);
  for (const auto& warning : plan.warnings) text += wrapped("! " + warning, 0);
  print(text);
  return Exit::done;
}

}  // namespace

void add_adopt(CLI::App& program, Chosen& chosen) {
  auto arguments = std::make_shared<AdoptArguments>();
  CLI::App& command =
      *program.add_subcommand("adopt", "put curves in force for periods: one new edition of the history");
  add_book(command, *arguments);
  add_station(command, *arguments);
  command.add_option("CURVE", arguments->curve,
                     "curve, or none:closed, none:ice, none:backwater, none:works, none:other");
  command.add_option("--from", arguments->from, "begin of its period");
  command.add_option(
      "--until", arguments->until,
      "end, excluded; where the next period begins if not given; open replaces all that follows");
  command.add_option("--blend", arguments->blend, "hours of gradual passage from the curve before");
  command
      .add_option("--period", arguments->periods, "CURVE,FROM[,UNTIL][,blend=HOURS]; once for each period")
      ->expected(1)
      ->take_all();
  command.add_option("--like", arguments->like, "restore the periods of this edition");
  command.add_option("--onto", arguments->onto, "refuse where the newest edition is not this one");
  command.add_flag("--replace", arguments->replace, "whole periods may disappear");
  command.add_flag("--try", arguments->only_try, "write nothing; show what flows would change");
  add_writer(command, *arguments, "why; required, the ledger keeps it");
  add_json(command, *arguments);
  add_utc(command, *arguments);
  command.callback([&chosen, arguments] {
    arguments->command_line = chosen.command_line;
    chosen.action = [arguments] { return adopt(*arguments); };
  });
}

}  // namespace scourbook::cli
