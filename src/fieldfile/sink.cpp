#include "fieldfile/sink.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <tuple>

namespace scourbook::fieldfile {

void FindingSink::add(Finding finding) {
  ++count_;
  if (kept_.size() >= most_) return;
  finding.file = file_;
  kept_.push_back(std::move(finding));
}

void FindingSink::add_grouped(const std::string& group, Finding finding) {
  const auto held = groups_.find(group);
  if (held != groups_.end()) {
    ++held->second.more;
    return;
  }
  const std::size_t index = kept_.size();
  add(std::move(finding));
  if (kept_.size() > index) groups_.emplace(group, Group{index});
}

Findings FindingSink::take() {
  for (const auto& [name, group] : groups_) {
    if (group.more == 0) continue;
    kept_[group.index].fault +=
        fmt::format(" (and on {} more {})", group.more, group.more == 1 ? "line" : "lines");
  }
  std::stable_sort(kept_.begin(), kept_.end(), [](const Finding& a, const Finding& b) {
    return std::tie(a.line, a.column) < std::tie(b.line, b.column);
  });
  if (count_ > kept_.size()) {
    Finding rest;
    rest.file = file_;
    rest.fault = fmt::format("{} more faults are not listed", count_ - kept_.size());
    rest.remedy = "mend those listed and take the file in again";
    kept_.push_back(std::move(rest));
  }
  groups_.clear();
  count_ = 0;
  return std::move(kept_);
}

}  // namespace scourbook::fieldfile
