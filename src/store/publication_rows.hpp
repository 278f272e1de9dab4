#pragma once
// The figures of a publication as rows.

#include <SQLiteCpp/SQLiteCpp.h>

#include <string>

namespace scourbook::store {

/// SHA-256 over the canonical text of its months, then its days: what publication.sha256 must be.
[[nodiscard]] std::string figures_digest(const SQLite::Database& db, const std::string& station,
                                         int publication);

}  // namespace scourbook::store
