#pragma once
// Data quality (OGC WaterML 2.0 part 1, quality code list) and the flags of a computed flow.

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace scourbook {

/// OGC WaterML 2.0 quality words, from best to worst for "the worse of two". The numbers are stored: never change their meaning.
enum class Quality : std::uint8_t { good = 0, unchecked = 1, estimate = 2, suspect = 3, poor = 4, missing = 5 };
[[nodiscard]] std::string_view word(Quality quality);
[[nodiscard]] std::optional<Quality> parse_quality(std::string_view text);
[[nodiscard]] constexpr Quality worse(Quality a, Quality b) { return a > b ? a : b; }

/// Flags of a flow, a bit each. The bits are stored: never change their meaning.
enum class Flag : std::uint16_t {
  below_gauged = 1 << 0,
  above_gauged = 1 << 1,
  above_surveyed = 1 << 2,
  no_flow = 1 << 3,
  blended = 1 << 4,
  shifted = 1 << 5,
  inferred = 1 << 6,
  carried = 1 << 7,
  estimated = 1 << 8,
  gap = 1 << 9
};
using Flags = std::uint16_t;
[[nodiscard]] constexpr Flags bit(Flag flag) { return static_cast<Flags>(flag); }
[[nodiscard]] constexpr bool has(Flags flags, Flag flag) { return (flags & bit(flag)) != 0; }
/// Words joined by a space, in the order above: "above-gauged inferred"; empty where none is set.
[[nodiscard]] std::string words(Flags flags);

}  // namespace scourbook
