#pragma once
// Periods and editions: which curve is in force when.

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "terms/time.hpp"

namespace scourbook {

/// Why a period has no curve.
enum class NoCurve { closed, ice, backwater, works, other };
[[nodiscard]] std::string_view word(NoCurve reason);
[[nodiscard]] std::optional<NoCurve> parse_no_curve(std::string_view text);

/// [from, until): one curve, or none with a reason. Open where `until` is empty.
struct Period {
  Instant from{};
  std::optional<Instant> until;
  std::optional<int> curve;
  NoCurve none = NoCurve::other;  ///< read only where `curve` is empty
  Millis blend{0};                ///< passage from the curve before, over [from, from + blend)
  friend bool operator==(const Period&, const Period&) = default;
};

/// A numbered, immutable list of one station's periods, by rising time, without overlap; gaps give no flow.
struct Edition {
  std::string station;
  int number = 0;  ///< from 1; 0 until stored
  std::optional<int> parent;
  std::int64_t act = 0;
  std::vector<Period> periods;
};

}  // namespace scourbook
