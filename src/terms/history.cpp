#include "terms/history.hpp"

#include <array>

namespace scourbook {
namespace {

constexpr std::array<std::string_view, 5> kNoCurveWords{"closed", "ice", "backwater", "works", "other"};

}  // namespace

std::string_view word(NoCurve reason) {
  return kNoCurveWords.at(static_cast<std::size_t>(reason));
}

std::optional<NoCurve> parse_no_curve(std::string_view text) {
  for (std::size_t i = 0; i < kNoCurveWords.size(); ++i) {
    if (text == kNoCurveWords[i]) return static_cast<NoCurve>(i);
  }
  return {};
}

}  // namespace scourbook
