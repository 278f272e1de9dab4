#include "cli/progress.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <algorithm>
#include <cstdio>

namespace scourbook::cli {
namespace {

constexpr auto kQuietFor = std::chrono::seconds(1);
constexpr auto kBetween = std::chrono::milliseconds(100);
constexpr std::int64_t kCells = 30;

}  // namespace

Progress::Progress(std::string label) : label_(std::move(label)), terminal_(isatty(STDERR_FILENO) == 1) {}

Progress::~Progress() {
  if (drawn_) std::fputs("\r\033[K", stderr);
}

void Progress::show(const std::string& label, std::int64_t done, std::int64_t all) {
  const auto now = Clock::now();
  if (!terminal_ || all <= 0 || now - start_ < kQuietFor || now - last_ < kBetween) return;
  last_ = now;
  drawn_ = true;
  const std::int64_t full = std::clamp<std::int64_t>(done * kCells / all, 0, kCells);
  fmt::print(stderr, "\r\033[K{} [{}{}] {} %", label, std::string(static_cast<std::size_t>(full), '#'),
             std::string(static_cast<std::size_t>(kCells - full), '.'), done * 100 / all);
  std::fflush(stderr);
}

}  // namespace scourbook::cli
