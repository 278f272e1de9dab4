#pragma once
// The rules of the house that a compiler does not know: data flows one way through the folders of src, SQL
// stays in one of them, and pure computation knows neither files nor a database.

#include <cstddef>
#include <filesystem>
#include <string>
#include <vector>

namespace house {

/// A breach: where, and which rule. `line` 0 speaks of the whole file or folder.
struct Breach {
  std::string file;  ///< path below the checked folder, with '/'
  std::size_t line = 0;
  std::string what;
};
[[nodiscard]] std::string describe(const std::vector<Breach>& breaches);

/// Rank of a folder of src; -1 where it has none. A folder may include itself and strictly lower ranks.
[[nodiscard]] int rank_of(const std::string& folder);

/// Checks every folder below `src`: ranks, includes, SQL, #pragma once, and that the folder's CMakeLists.txt
/// names what its files include.
[[nodiscard]] std::vector<Breach> check(const std::filesystem::path& src);

}  // namespace house
