#pragma once
// A progress bar on a terminal, for whatever takes over a second.

#include <chrono>
#include <cstdint>
#include <string>

namespace scourbook::cli {

/// Draws on standard error where that is a terminal; clears its line at the end.
class Progress {
 public:
  explicit Progress(std::string label);
  ~Progress();
  Progress(const Progress&) = delete;
  Progress& operator=(const Progress&) = delete;
  void show(std::int64_t done, std::int64_t all) { show(label_, done, all); }
  void show(const std::string& label, std::int64_t done, std::int64_t all);

 private:
  using Clock = std::chrono::steady_clock;
  std::string label_;
  bool terminal_;
  bool drawn_ = false;
  Clock::time_point start_ = Clock::now();
  Clock::time_point last_ = start_;
};

}  // namespace scourbook::cli
