#include "terms/curve.hpp"

#include <array>

namespace scourbook {
namespace {

constexpr std::array<std::string_view, 6> kFateWords{"held",    "recomputed", "refitted",
                                                     "carried", "rescaled",   "new"};
constexpr std::array<std::string_view, 3> kUseWords{"used", "left out", "weighted down"};
constexpr std::array<std::string_view, 2> kFormWords{"power", "conveyance"};
constexpr std::array<std::string_view, 3> kHoldWords{"velocity-scale", "carried", "flow-scale"};

}  // namespace

std::string_view word(Fate fate) {
  return kFateWords.at(static_cast<std::size_t>(fate));
}
std::string_view word(GaugingUse use) {
  return kUseWords.at(static_cast<std::size_t>(use));
}
std::string_view word(CurveForm form) {
  return kFormWords.at(static_cast<std::size_t>(form));
}
std::string_view word(HoldPolicy policy) {
  return kHoldWords.at(static_cast<std::size_t>(policy));
}

std::optional<Fate> parse_fate(std::string_view text) {
  for (std::size_t i = 0; i < kFateWords.size(); ++i) {
    if (text == kFateWords[i]) return static_cast<Fate>(i);
  }
  return {};
}

}  // namespace scourbook
