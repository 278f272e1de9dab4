#include "terms/quality.hpp"

#include <array>

namespace scourbook {
namespace {

constexpr std::array<std::string_view, 6> kQualityWords{"good",    "unchecked", "estimate",
                                                        "suspect", "poor",      "missing"};
// In the order of the bits.
constexpr std::array<std::string_view, 10> kFlagWords{
    "below-gauged", "above-gauged", "above-surveyed", "no-flow",   "blended",
    "shifted",      "inferred",     "carried",        "estimated", "gap"};

}  // namespace

std::string_view word(Quality quality) {
  return kQualityWords.at(static_cast<std::size_t>(quality));
}

std::optional<Quality> parse_quality(std::string_view text) {
  for (std::size_t i = 0; i < kQualityWords.size(); ++i) {
    if (text == kQualityWords[i]) return static_cast<Quality>(i);
  }
  return {};
}

std::string words(Flags flags) {
  std::string joined;
  for (std::size_t i = 0; i < kFlagWords.size(); ++i) {
    if ((flags & (1u << i)) == 0) continue;
    if (!joined.empty()) joined += ' ';
    joined += kFlagWords[i];
  }
  return joined;
}

}  // namespace scourbook
