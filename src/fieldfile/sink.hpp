#pragma once
// Collects the findings of one file, in bounded memory.

#include <map>
#include <string>

#include "fieldfile/lines.hpp"
#include "terms/finding.hpp"

namespace scourbook::fieldfile {

class FindingSink {
 public:
  FindingSink(std::string file, const Limits& limits) : file_(std::move(file)), most_(limits.most_findings) {}

  /// Adds a finding; its file is set here.
  void add(Finding finding);
  /// Adds the first finding of each `group`; those after it are only counted in its words ("and on 3 more
  /// lines").
  void add_grouped(const std::string& group, Finding finding);

  [[nodiscard]] bool empty() const { return count_ == 0; }
  [[nodiscard]] const std::string& file() const { return file_; }
  /// All findings by line and column; one more says how many were not kept.
  [[nodiscard]] Findings take();

 private:
  struct Group {
    std::size_t index;
    std::size_t more = 0;
  };
  std::string file_;
  std::size_t most_;
  std::size_t count_ = 0;
  Findings kept_;
  std::map<std::string, Group> groups_;
};

}  // namespace scourbook::fieldfile
