#pragma once
// What check asks of single things: is it fit to be computed with, is it the same, does it derive again.

#include <optional>
#include <string>

#include "store/book.hpp"

namespace scourbook::publish {

/// Why a stored edition or curve cannot be computed with (a damaged book may hold anything); empty where it
/// can.
[[nodiscard]] std::string unfit(const Edition& edition);
[[nodiscard]] std::string unfit(const RatingCurve& curve);

/// Where a publication and the same one made again first differ, in words; empty where they do not.
[[nodiscard]] std::string difference(const store::Publication& kept, const store::Publication& again);

/// Largest |ln Q1 - ln Q2| over the levels of the first curve's band table. A flow against none counts as
/// 1; below 1e-9 m3/s is none.
[[nodiscard]] double largest_gap(const RatingCurve& kept, const RatingCurve& again);

/// A curve derived again from the records and with the options that it names, as known when it was stored.
struct DerivedAgain {
  std::optional<RatingCurve> curve;
  std::string refusal;  ///< why there is none
};
[[nodiscard]] DerivedAgain derive_again(const store::Book& book, const RatingCurve& curve);

}  // namespace scourbook::publish
