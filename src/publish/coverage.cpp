#include "publish/coverage.hpp"

#include <algorithm>
#include <utility>

namespace scourbook::publish {

std::vector<Coverage> coverage(const std::vector<store::Publication>& heads, Instant from, Instant until) {
  std::vector<Coverage> covered;
  std::vector<std::pair<Instant, Instant>> left;  // what no newer one covers
  if (from < until) left.emplace_back(from, until);
  for (auto head = heads.rbegin(); head != heads.rend() && !left.empty(); ++head) {
    std::vector<std::pair<Instant, Instant>> rest;
    for (const auto& [begin, end] : left) {
      const Instant first = std::max(begin, head->from), last = std::min(end, head->until);
      if (first >= last) {
        rest.emplace_back(begin, end);
        continue;
      }
      covered.push_back({first, last, head->number});
      if (begin < first) rest.emplace_back(begin, first);
      if (last < end) rest.emplace_back(last, end);
    }
    left = std::move(rest);
  }
  std::sort(covered.begin(), covered.end(),
            [](const Coverage& a, const Coverage& b) { return a.from < b.from; });
  return covered;
}

}  // namespace scourbook::publish
