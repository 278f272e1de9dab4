#pragma once
// States that follow from what the book holds: never stored.

#include <optional>
#include <string>
#include <vector>

#include "store/book.hpp"

namespace scourbook::history {

/// Which state of one station a question speaks of: newest known unless asked otherwise.
struct View {
  std::string station;
  Known known;                 ///< acts that may be seen
  std::int64_t data_version = 0;
  std::optional<Edition> edition;
};

/// Resolves edition and data version as known; throws StoreError refused where an asked one does not exist or is not yet known.
[[nodiscard]] View view_of(const store::Book& book, const std::string& station, Known known = {},
                           std::optional<int> edition = {}, std::optional<std::int64_t> data_version = {});

enum class CurveState { proposed, in_force, superseded };
[[nodiscard]] std::string_view word(CurveState state);
[[nodiscard]] CurveState state_of(int curve, const std::vector<Edition>& editions);

/// Why a curve is out of date: inputs that got a newer version (gauging, survey, reach row) or whose level moved (gauge zero,
/// stage correction). Empty when it is not.
[[nodiscard]] std::vector<std::string> out_of_date(const store::Book& book, const RatingCurve& curve, Known known = {});

/// Level in ticks of a stage of the station at `time`: stage + gauge zero + stage corrections. Rows as known, by time.
class LevelDatum {
 public:
  LevelDatum(std::vector<Stored<GaugeZeroRow>> zeros, std::vector<Stored<StageCorrection>> corrections);
  /// Nothing before the first gauge zero.
  [[nodiscard]] std::optional<Level> level(Stage stage, Instant time) const;
  [[nodiscard]] std::optional<GaugeZero> zero_at(Instant time) const;
  /// Sum of the corrections at `time`, each rounded to whole ticks: a0 + (a1 - a0) ((t - from) / (until - from)).
  [[nodiscard]] HeightChange correction_at(Instant time) const;

 private:
  std::vector<Stored<GaugeZeroRow>> zeros_;
  std::vector<Stored<StageCorrection>> corrections_;
};
[[nodiscard]] LevelDatum level_datum(const store::Book& book, const std::string& station, Known known = {});

}  // namespace scourbook::history
