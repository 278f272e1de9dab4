#pragma once
// Rows of stage_piece: what is in force, and appending.

#include <SQLiteCpp/SQLiteCpp.h>

#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "store/piece.hpp"

namespace scourbook::store {

/// The latest piece with act <= known whose span holds `time`: it decides there.
[[nodiscard]] std::optional<Piece> piece_at(const SQLite::Database& db, const std::string& station,
                                            Instant time, std::int64_t known);

/// Pieces that still decide something, and the readings of each that no later piece spans; latest piece
/// first.
struct InForce {
  Piece piece;
  PieceValues values;
};
[[nodiscard]] std::vector<InForce> in_force(const SQLite::Database& db, const std::string& station, int month,
                                            std::int64_t known);

/// Every piece of the book, by id.
void for_each_piece(const SQLite::Database& db, const std::function<void(const Piece&)>& work);

/// Gives the piece its id and digest, and stores it.
void insert_piece(SQLite::Database& db, Piece& piece);

}  // namespace scourbook::store
