#include <fmt/format.h>

#include <algorithm>
#include <cassert>

#include "fieldfile/number.hpp"
#include "fieldfile/table.hpp"
#include "terms/nearest.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr std::size_t kLongestName = 64;
constexpr const char* kTimeForm = "a time such as 2020-01-31T06:15+01:00, or without offset in station time";

std::string joined(const Words& words) {
  std::string list;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (i > 0) list += i + 1 == words.size() ? " or " : ", ";
    list += words[i];
  }
  return list;
}

}  // namespace

std::string_view Row::text(std::string_view column) const {
  const auto cell = header_->find(column);
  return cell ? record_.fields[*cell].text : std::string_view{};
}

std::string_view Row::title(std::string_view column) const {
  const auto cell = header_->find(column);
  return cell ? std::string_view(header_->cells[*cell].name) : column;
}

const Unit& Row::unit(std::string_view column) const {
  const auto cell = header_->find(column);
  assert(cell && header_->cells[*cell].unit);
  return *header_->cells[*cell].unit;
}

Finding Row::place(std::string_view column) const {
  const auto cell = header_->find(column);
  return cell ? record_.at(record_.fields[*cell]) : record_.behind();
}

void Row::fault(std::string_view column, std::string fault, std::string expected, std::string remedy) {
  Finding finding = place(column);
  finding.fault = std::move(fault);
  finding.expected = std::move(expected);
  finding.remedy = std::move(remedy);
  findings_->add(std::move(finding));
  ok_ = false;
}

void Row::fault_once(const std::string& group, std::string_view column, std::string fault,
                     std::string expected, std::string remedy) {
  Finding finding = place(column);
  finding.fault = std::move(fault);
  finding.expected = std::move(expected);
  finding.remedy = std::move(remedy);
  findings_->add_grouped(group, std::move(finding));
  ok_ = false;
}

void Row::missing(std::string_view column, std::string expected) {
  fault(column, fmt::format("{} is missing", title(column)), std::move(expected));
}

std::string Row::name(std::string_view column) {
  const std::string_view given = text(column);
  if (given.empty()) {
    missing(column, "a name");
    return {};
  }
  const bool odd = std::any_of(given.begin(), given.end(), [](char c) {
    return static_cast<unsigned char>(c) < 0x20 || c == ',' || c == '"' || c == 0x7F;
  });
  if (odd || given.front() == '#' || count_characters(given) > kLongestName) {
    fault(column, fmt::format("{} is no usable name: {}", title(column), in_quotes(given)),
          "at most 64 characters on one line, without comma and quote, not beginning with #");
  }
  return std::string(given);
}

std::string Row::name_or(std::string_view column, const std::string& otherwise) {
  return blank(column) ? otherwise : name(column);
}

std::string Row::station(const KnownStations& known) {
  std::string id = name("station");
  if (id.empty() || known.find(id) != known.end()) return id;
  Words ids;
  for (const auto& [held, station] : known) ids.push_back(held);
  const std::string nearest = nearest_word(id, ids);
  fault_once("station " + id, "station", fmt::format("station {} is not known", in_quotes(id)),
             "a station of the book, or of a station file in the same take",
             nearest.empty() ? "take in a station file that describes it"
                             : fmt::format("write {} if that is meant, or take in a station file", nearest));
  return id;
}

std::optional<double> Row::number(std::string_view column, const Range& range, bool must) {
  const std::string_view given = text(column);
  if (given.empty()) {
    if (must) missing(column, fmt::format("a number, {}", range.expected));
    return {};
  }
  const ParsedNumber parsed = parse_number(given);
  if (parsed.fault != NumberFault::none) {
    fault(column, fmt::format("{} {}: {}", title(column), explain(parsed.fault), in_quotes(given)),
          "a decimal number with a point, for example 12.5", remedy_of(parsed.fault, given, !must));
    return {};
  }
  const auto cell = header_->find(column);
  const auto& unit = header_->cells[*cell].unit;
  const double value = unit ? parsed.value * unit->to_si : parsed.value;
  const bool low = range.least_too ? value < range.least : value <= range.least;
  if (low || value > range.most) {
    const bool negative = value < 0 && range.least == 0;
    fault(column, fmt::format("{} is {}: {}", title(column), negative ? "negative" : "out of range", given),
          range.expected);
    return {};
  }
  return value;
}

void Row::fault_of_time(std::string_view column, TimeFault bad) {
  const std::string_view name = title(column);
  const std::string given = in_quotes(text(column));
  switch (bad) {
    case TimeFault::none:
      return;
    case TimeFault::not_a_time:
      return fault(column, fmt::format("{} is not a time: {}", name, given), kTimeForm);
    case TimeFault::no_such_date: {
      const bool leap_day = text(column).substr(4, 6) == "-02-29";
      return fault(
          column, fmt::format("{} names a date that does not exist: {}", name, given),
          "a date of the calendar, years 1677 to 2261",
          leap_day ? fmt::format("{} is no leap year: write the right date", text(column).substr(0, 4)) : "");
    }
    case TimeFault::no_such_hour:
      return fault(column, fmt::format("{} names a time of day that does not exist: {}", name, given),
                   "hours 00 to 23, minutes and seconds 00 to 59", "write 24:00 as 00:00 of the next day");
    case TimeFault::no_offset:
      return fault_once("offset " + std::string(text("station")), column,
                        fmt::format("{} has no offset from UTC: {}", name, given),
                        "an offset in the text, or a known station whose offset holds",
                        "write the offset behind the time, for example +01:00, or take in a station file");
  }
}

std::optional<Instant> Row::time(std::string_view column, const KnownStations& known, bool must) {
  const std::string_view given = text(column);
  if (given.empty()) {
    if (must) missing(column, kTimeForm);
    return {};
  }
  const auto station = known.find(text("station"));
  std::optional<UtcOffset> offset;
  // A station whose own row is faulty lends an offset for the check only: the take is refused already.
  if (station != known.end()) offset = station->second.offset.value_or(UtcOffset{});
  const ParsedTime parsed = parse_time(given, offset);
  if (!parsed.ok()) {
    fault_of_time(column, parsed.fault);
    return {};
  }
  return parsed.time;
}

std::optional<std::size_t> Row::word(std::string_view column, const Words& words, bool must) {
  const std::string_view given = text(column);
  if (given.empty()) {
    if (must) missing(column, joined(words));
    return {};
  }
  const auto found = std::find(words.begin(), words.end(), given);
  if (found != words.end()) return static_cast<std::size_t>(found - words.begin());
  const std::string nearest = nearest_word(given, words);
  fault(column, fmt::format("{} is not a known word: {}", title(column), in_quotes(given)), joined(words),
        nearest.empty() ? "" : fmt::format("write {} if that is meant", nearest));
  return {};
}

bool Row::withdrawn() {
  static const Words kYesNo{"yes", "no"};
  return word("withdrawn", kYesNo, false) == 0u;
}

}  // namespace scourbook::fieldfile
