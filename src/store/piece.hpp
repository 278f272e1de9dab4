#pragma once
// A stage piece as text and as readings. No SQL here.

#include <cstdint>
#include <string>
#include <vector>

#include "store/stage.hpp"

namespace scourbook::store {

/// One reading of a piece with the line that it came from.
struct PieceReading {
  std::int64_t time_ms = 0;
  std::int64_t value = kMissing;  ///< in 10^-decimals of the unit, as recorded
  Quality quality = Quality::unchecked;
  std::int64_t file = 0;
  std::int64_t line = 0;
};

/// A row of stage_piece.
struct Piece {
  std::int64_t id = 0;
  std::int64_t act = 0;
  std::string station;
  int month = 0;
  bool merged = false;
  std::int64_t file = 0;           ///< that it came from; of its first reading where merged
  std::int64_t span_first_ms = 0;  ///< what it spans, both ends included: here it decides
  std::int64_t span_last_ms = 0;
  std::int64_t first_ms = 0;
  std::int64_t step_ms = 0;  ///< 0: irregular, or a single reading
  std::int64_t count = 0;
  StageUnit unit = StageUnit::metre;
  int decimals = 0;
  std::string values;        ///< [948,null,...], or [[ms after first_ms, value],...] where step_ms is 0
  std::string quality_runs;  ///< [[index of the first reading, "good"],...]
  std::string line_runs;  ///< [[index of the first reading, file, line],...]; lines rise by one within a run
  std::string sha256;     ///< over every column before it
};

[[nodiscard]] const char* word(StageUnit unit);  ///< "m", "ft"
[[nodiscard]] StageUnit parse_unit(const std::string& text);

/// Fills first_ms, step_ms, count and the three texts. `readings` by rising time; may be empty, then only the
/// span speaks: nothing is held there.
void encode(const std::vector<PieceReading>& readings, Piece& piece);

/// Times and values of a piece. Throws StoreError damaged where its text is none that encode() makes.
struct PieceValues {
  std::vector<std::int64_t> time_ms;
  std::vector<std::int64_t> value;
  std::vector<Quality> quality;
};
[[nodiscard]] PieceValues decode(const Piece& piece);
/// All readings, with file and line.
[[nodiscard]] std::vector<PieceReading> readings_of(const Piece& piece);

/// What Piece::sha256 must be.
[[nodiscard]] std::string digest_of(const Piece& piece);

}  // namespace scourbook::store
