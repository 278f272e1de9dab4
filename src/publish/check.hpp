#pragma once
// Does the book still say what it said? Ledger, digests, replays and publications computed again.

#include <functional>
#include <string>
#include <vector>

#include "store/book.hpp"

namespace scourbook::publish {

struct CheckOptions {
  bool rederive = false;  ///< derive every curve again from its pinned inputs
  std::function<void(const std::string& what, std::int64_t done, std::int64_t all)>
      progress;  ///< may be empty
};

struct CheckReport {
  std::int64_t acts = 0;
  std::int64_t replays = 0, replay_months = 0;  ///< computed again
  std::int64_t publications = 0, published_values = 0;
  std::int64_t curves = 0;               ///< derived again
  double largest_rederivation_gap = 0;   ///< largest |ln| between stored and rederived curve
  std::vector<store::Damage> damage;     ///< empty: the book is sound
  std::vector<std::string> out_of_date;  ///< curves in force whose inputs were corrected: told, not damage
};

/// Where the store finds damage, replays and publications are still computed again as far as they can be
/// read.
[[nodiscard]] CheckReport check(const store::Book& book, const CheckOptions& options = {});

}  // namespace scourbook::publish
