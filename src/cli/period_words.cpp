#include "cli/period_words.hpp"

#include <fmt/format.h>

#include <charconv>
#include <cmath>

namespace scourbook::cli {
namespace {

std::vector<std::string> parts_of(const std::string& text) {
  std::vector<std::string> parts(1);
  for (char c : text) {
    if (c == ',') {
      parts.emplace_back();
    } else {
      parts.back() += c;
    }
  }
  return parts;
}

bool begins(const std::string& text, const char* with) {
  return text.rfind(with, 0) == 0;
}

}  // namespace

void read_curve_word(const std::string& text, Period& period) {
  if (begins(text, "none:")) {
    const auto reason = parse_no_curve(std::string_view(text).substr(5));
    if (!reason) {
      throw UsageError(
          fmt::format("\"{}\": no such reason; expected none:closed, none:ice, none:backwater, "
                      "none:works or none:other",
                      text));
    }
    period.curve.reset();
    period.none = *reason;
    return;
  }
  int number = 0;
  const char* end = text.data() + text.size();
  const auto [rest, fault] = std::from_chars(text.data(), end, number);
  if (fault != std::errc{} || rest != end || number < 1) {
    throw UsageError(fmt::format("\"{}\" is no curve; expected its number, or none:REASON", text));
  }
  period.curve = number;
}

void read_until_word(const std::string& text, UtcOffset offset, const std::string& option,
                     history::Adoption& adoption) {
  adoption.ends_open = text == "open";
  if (!text.empty() && !adoption.ends_open) adoption.period.until = time_of(text, offset, option);
}

Millis blend_of(const std::string& hours) {
  double value = 0;
  const char* end = hours.data() + hours.size();
  const auto [rest, fault] = std::from_chars(hours.data(), end, value);
  if (fault != std::errc{} || rest != end || !(value >= 0) || value > 24 * 366) {
    throw UsageError(
        fmt::format("blend \"{}\" is no number of hours; expected 0 or more, for example 12", hours));
  }
  return Millis(std::llround(value * 3.6e6));
}

history::Adoption adoption_of(const std::string& text, UtcOffset offset) {
  history::Adoption adoption;
  std::vector<std::string> plain;
  for (const std::string& part : parts_of(text)) {
    if (begins(part, "blend=")) {
      adoption.period.blend = blend_of(part.substr(6));
    } else if (part.find('=') != std::string::npos) {
      throw UsageError(fmt::format("--period {}: \"{}\" is not known; expected blend=HOURS", text, part));
    } else {
      plain.push_back(part);
    }
  }
  if (plain.size() < 2 || plain.size() > 3) {
    throw UsageError(fmt::format("--period {}: expected CURVE,FROM[,UNTIL][,blend=HOURS]", text));
  }
  read_curve_word(plain[0], adoption.period);
  adoption.period.from = time_of(plain[1], offset, "--period");
  if (plain.size() == 3) read_until_word(plain[2], offset, "--period", adoption);
  return adoption;
}

}  // namespace scourbook::cli
