#pragma once
// An act: one change of the book, by someone, for a reason; a link of the ledger's hash chain.

#include <cstdint>
#include <string>
#include <vector>

#include "terms/time.hpp"

namespace scourbook {

struct ActTable {
  std::string table;
  std::int64_t rows = 0;
  std::string sha256;  ///< over the canonical text of the rows, in primary-key order
};

struct Act {
  std::int64_t number = 0;
  Instant time{};
  std::string who;
  std::string station;  ///< empty where it concerns the book or several stations
  std::string reason;
  std::string command;
  std::string program;  ///< program version
  int method = 1;       ///< method version
  std::vector<ActTable> tables;
  std::string hash;
};

/// What a question may see: acts up to this number. Every reading query takes one.
struct Known {
  std::int64_t act = INT64_MAX;
};

}  // namespace scourbook
