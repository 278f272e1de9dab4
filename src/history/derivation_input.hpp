#pragma once
// Collects from the book what a derivation needs, and applies the parent rules.

#include <optional>
#include <string>
#include <vector>

#include "rederivation/derive.hpp"
#include "store/book.hpp"

namespace scourbook::history {

struct DerivationRequest {
  std::string station;
  std::string survey;
  Instant from{};
  std::optional<Instant> until;
  std::optional<int> descends_from;
  bool first = false;
  rederivation::Options options;
};

struct DerivationInput {
  std::vector<std::string> refusals;  ///< rules of the parent, missing records; in words, with the way on
  rederivation::Input input;          ///< complete when there are no refusals
};

/// Parent: descends_from, else the curve in force just before `from` (never one whose period starts there),
/// else a first curve. Refused where it or an ancestor used a gauging that this derivation would use. Throws
/// StoreError refused for an unknown station.
[[nodiscard]] DerivationInput collect(const store::Book& book, const DerivationRequest& request,
                                      Known known = {});

}  // namespace scourbook::history
