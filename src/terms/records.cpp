#include "terms/records.hpp"

#include <array>

namespace scourbook {
namespace {

constexpr std::array<std::string_view, 3> kControlWords{"section", "channel", "overbank"};
constexpr std::array<std::string_view, 3> kLawWords{"manning", "chezy", "critical"};

}  // namespace

std::string_view word(ControlKind kind) {
  return kControlWords.at(static_cast<std::size_t>(kind));
}
std::string_view word(FlowLaw law) {
  return kLawWords.at(static_cast<std::size_t>(law));
}

std::optional<ControlKind> parse_control(std::string_view text) {
  for (std::size_t i = 0; i < kControlWords.size(); ++i) {
    if (text == kControlWords[i]) return static_cast<ControlKind>(i);
  }
  return {};
}

std::optional<FlowLaw> parse_flow_law(std::string_view text) {
  for (std::size_t i = 0; i < kLawWords.size(); ++i) {
    if (text == kLawWords[i]) return static_cast<FlowLaw>(i);
  }
  return {};
}

Instant Gauging::middle() const {
  if (!end) return start;
  return start + (*end - start) / 2;
}

Stage Gauging::mean_stage() const {
  if (!stage_end) return stage;
  // Halves go away from zero, as every rounding to ticks does.
  const std::int64_t sum = stage.ticks() + stage_end->ticks();
  return Stage::from_ticks((sum + (sum > 0 ? 1 : sum < 0 ? -1 : 0)) / 2);
}

}  // namespace scourbook
