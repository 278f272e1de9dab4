#pragma once
// Field files: text to records with all findings, then one append.

#include <cstdint>
#include <functional>
#include <string>
#include <vector>

#include "store/book.hpp"
#include "terms/finding.hpp"

namespace scourbook::fieldfile {

struct TakeOptions {
  std::string who;
  std::string command;
  bool correct = false;  ///< --correct: new versions of held records
  std::string reason;
  std::function<void(std::int64_t done_bytes, std::int64_t all_bytes)> progress;  ///< may be empty
};

/// What one file brought.
struct FileTaken {
  std::string file;
  std::string kind;
  std::int64_t rows = 0;      ///< data lines
  std::int64_t stored = 0;    ///< records or readings stored
  std::int64_t repeated = 0;  ///< equal to held ones, skipped
  std::vector<std::string> stations;
  std::vector<std::string> remarks;  ///< e.g. what a gauge zero found late touches
};

struct Taken {
  Findings findings;  ///< not empty: nothing was stored
  std::int64_t act = 0;
  std::vector<FileTaken> files;
};

/// Takes in the files, all or none, in one act, in the order in which their kinds depend on each other
/// (stations first). Throws StoreError only for the book itself; a file that cannot be read is a finding.
[[nodiscard]] Taken take(store::Book& book, const std::vector<std::string>& paths,
                         const TakeOptions& options);

}  // namespace scourbook::fieldfile
