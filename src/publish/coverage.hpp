#pragma once
// Which publication speaks for which time: the newest that covers it.

#include <vector>

#include "store/book.hpp"

namespace scourbook::publish {

/// A stretch of time and the newest publication that covers all of it.
struct Coverage {
  Instant from{};
  Instant until{};
  int publication = 0;
};

/// The part of [from, until) that is published, by time, without overlap. `heads`: publications as known,
/// numbers rising.
[[nodiscard]] std::vector<Coverage> coverage(const std::vector<store::Publication>& heads, Instant from,
                                             Instant until);

}  // namespace scourbook::publish
