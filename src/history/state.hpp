#pragma once
// States that follow from what the book holds: never stored.

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "history/level_datum.hpp"
#include "store/book.hpp"

namespace scourbook::history {

/// Which state of one station a question speaks of: newest known unless asked otherwise.
struct View {
  std::string station;
  Known known;                     ///< acts that may be seen
  std::int64_t data_version = 0;   ///< stage, corrections and gauge zero are read as known at this act
  std::optional<Edition> edition;  ///< none: nothing was adopted yet
};

/// Resolves edition and data version as known. Throws StoreError refused for an unknown station and where an
/// asked edition or data version does not exist or is not yet known.
[[nodiscard]] View view_of(const store::Book& book, const std::string& station, Known known = {},
                           std::optional<int> edition = {}, std::optional<std::int64_t> data_version = {});

/// in_force: the newest edition uses it in some period; superseded: only an older one does; proposed: none
/// does.
enum class CurveState { proposed, in_force, superseded };
[[nodiscard]] std::string_view word(CurveState state);  ///< "proposed", "in force", "superseded"
/// `editions` as known, the newest last.
[[nodiscard]] CurveState state_of(int curve, const std::vector<Edition>& editions);

/// Why a curve is out of date, in words: inputs that got a newer version or were withdrawn (gauging, survey,
/// reach row), gaugings whose level moved (gauge zero, stage correction), and a parent that is out of date
/// itself. Empty when it is not. Gaugings left out by name are no inputs.
[[nodiscard]] std::vector<std::string> out_of_date(const store::Book& book, const RatingCurve& curve,
                                                   Known known = {});

}  // namespace scourbook::history
