#pragma once
// Where a stored record came from: file, line, version, act.

#include <cstdint>
#include <string>

namespace scourbook {

struct SourceLine {
  std::int64_t file = 0;  ///< number of the file in the book
  std::int64_t line = 0;  ///< line in it, from 1
};

/// A record as the book holds it. `act` is the act that wrote this version.
template <class Record>
struct Stored {
  Record value;
  int version = 1;  ///< 1 is the first; corrections add versions
  bool withdrawn = false;
  std::int64_t act = 0;
  SourceLine source;
};

}  // namespace scourbook
