#pragma once
// The known word that a misspelt one most likely meant.

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace scourbook {

/// Fewest insertions, deletions, replacements and swaps of neighbours (each once at most in one place) that
/// turn `a` into `b`, in bytes, case ignored for ASCII.
[[nodiscard]] std::size_t edit_distance(std::string_view a, std::string_view b);

/// The word of `known` nearest to `text`, empty where none is within a third of its length (at least 1, at
/// most 3 edits). The first of equally near ones.
[[nodiscard]] std::string nearest_word(std::string_view text, const std::vector<std::string>& known);

}  // namespace scourbook
