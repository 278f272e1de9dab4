#pragma once
// Rows of stage_piece: what is in force, and appending.

#include <SQLiteCpp/SQLiteCpp.h>

#include <optional>
#include <string>
#include <vector>

#include "store/piece.hpp"

namespace scourbook::store {

/// Pieces of a month with act <= known, the latest first.
[[nodiscard]] std::vector<Piece> pieces_of(const SQLite::Database& db, const std::string& station, int month,
                                           std::int64_t known);

/// Pieces that still decide something, and the readings of each that no later piece spans; latest piece
/// first.
struct InForce {
  Piece piece;
  PieceValues values;
};
[[nodiscard]] std::vector<InForce> in_force(const SQLite::Database& db, const std::string& station, int month,
                                            std::int64_t known);

/// Gives the piece its id and digest, and stores it.
void insert_piece(SQLite::Database& db, Piece& piece);

}  // namespace scourbook::store
