#include "terms/nearest.hpp"

#include <algorithm>

namespace scourbook {
namespace {

char lower(char c) {
  return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
}
bool same(char a, char b) {
  return lower(a) == lower(b);
}

constexpr std::size_t kLongestWord = 64;  // beyond it nothing was a misspelling

}  // namespace

// Optimal string alignment: Wagner and Fischer (1974) with the swap of neighbours added by Damerau (1964).
std::size_t edit_distance(std::string_view a, std::string_view b) {
  std::vector<std::size_t> before(b.size() + 1);
  std::vector<std::size_t> last(b.size() + 1);
  std::vector<std::size_t> now(b.size() + 1);
  for (std::size_t j = 0; j <= b.size(); ++j) last[j] = j;
  for (std::size_t i = 1; i <= a.size(); ++i) {
    now[0] = i;
    for (std::size_t j = 1; j <= b.size(); ++j) {
      const std::size_t replaced = last[j - 1] + (same(a[i - 1], b[j - 1]) ? 0 : 1);
      now[j] = std::min({last[j] + 1, now[j - 1] + 1, replaced});
      const bool swapped = i > 1 && j > 1 && same(a[i - 1], b[j - 2]) && same(a[i - 2], b[j - 1]);
      if (swapped) now[j] = std::min(now[j], before[j - 2] + 1);
    }
    std::swap(before, last);
    std::swap(last, now);
  }
  return last[b.size()];
}

std::string nearest_word(std::string_view text, const std::vector<std::string>& known) {
  if (text.empty() || text.size() > kLongestWord) return {};
  std::string nearest;
  std::size_t least = std::clamp<std::size_t>(text.size() / 3, 1, 3) + 1;
  for (const std::string& candidate : known) {
    if (candidate.size() > kLongestWord) continue;
    const std::size_t distance = edit_distance(text, candidate);
    if (distance < least) {
      least = distance;
      nearest = candidate;
    }
  }
  return nearest;
}

}  // namespace scourbook
