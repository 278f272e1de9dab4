#pragma once
// What a take has touched: levels that moved, curves that are out of date since.

#include <string>
#include <vector>

#include "fieldfile/take.hpp"
#include "store/book.hpp"

namespace scourbook::cli {

/// Sentences, station by station; empty where nothing of a history is touched.
[[nodiscard]] std::vector<std::string> touched_by(const store::Book& book, const fieldfile::Taken& taken);

}  // namespace scourbook::cli
