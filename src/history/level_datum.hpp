#pragma once
// From stage to level: gauge zero and stage corrections of one station, as known.

#include <cstdint>
#include <optional>
#include <vector>

#include "store/book.hpp"
#include "terms/provenance.hpp"
#include "terms/records.hpp"

namespace scourbook::history {

/// Level = stage + gauge zero at that time + stage corrections at that time. All are whole ticks of 1e-8 m,
/// so the sum is exact; it becomes a double once, as ticks / 1e8.
class LevelDatum {
 public:
  /// Rows as known: zeros by valid_from; corrections in any order, none with until <= from counts.
  LevelDatum(std::vector<Stored<GaugeZeroRow>> zeros, std::vector<Stored<StageCorrection>> corrections);

  /// Nothing before the first gauge zero.
  [[nodiscard]] std::optional<Level> level(Stage stage, Instant time) const;
  [[nodiscard]] std::optional<GaugeZero> zero_at(Instant time) const;
  /// Sum of the corrections at `time`, each rounded to whole ticks (halves away from zero):
  /// a0 + (a1 - a0) ((t - from) / (until - from)), for from <= t < until.
  [[nodiscard]] HeightChange correction_at(Instant time) const;

  /// level() of many readings, m: arrays of equal length, times rising; quiet NaN where the stage is
  /// store::kMissing or there is no gauge zero yet. Equal to level() bit by bit.
  [[nodiscard]] std::vector<double> levels_m(const std::vector<std::int64_t>& time_ms,
                                             const std::vector<std::int64_t>& stage_ticks) const;

 private:
  std::vector<Stored<GaugeZeroRow>> zeros_;
  std::vector<Stored<StageCorrection>> corrections_;
};

[[nodiscard]] LevelDatum level_datum(const store::Book& book, const std::string& station, Known known = {});

}  // namespace scourbook::history
