#pragma once
// A small book with at least one row in every table, written through the store's own interface by a clock
// that the test holds: the same content and times at every run.

#include <cstdlib>
#include <filesystem>
#include <stdexcept>
#include <string>
#include <vector>

#include "store/book.hpp"
#include "store/outside.hpp"

namespace full_book {

using namespace scourbook;

inline Instant at(const std::string& text) {
  const ParsedTime parsed = parse_time(text, UtcOffset{});
  if (!parsed.ok()) throw std::logic_error("no time: " + text);
  return parsed.time;
}

inline const std::string kStation = "TAR-1";

inline store::ActHead head(const std::string& reason) {
  return {"records officer A", kStation, reason, "test"};
}

/// A folder of its own for one test, gone afterwards.
class Folder {
 public:
  Folder() {
    std::string pattern = (std::filesystem::temp_directory_path() / "store-XXXXXX").string();
    if (mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("no folder for the test");
    path_ = pattern;
  }
  ~Folder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  [[nodiscard]] std::string path(const std::string& name = "b.scourbook") const { return path_ + "/" + name; }

 private:
  std::string path_;
};

/// Acts are timed by it: from 2024-05-01T08:00Z, a minute later at every question.
class TestClock {
 public:
  TestClock() {
    store::use_clock([this] { return time += Millis(60'000); });
  }
  ~TestClock() { store::use_clock({}); }
  TestClock(const TestClock&) = delete;
  TestClock& operator=(const TestClock&) = delete;
  Instant time = at("2024-05-01T08:00Z");
};

Station station(const std::string& id = kStation);
Survey survey(const std::string& id, const std::string& time);
Gauging gauging(const std::string& id, const std::string& start, double stage_m, double m3s);
ReachRow reach(ControlKind kind, const std::string& from = "2019-01-01T00:00Z");

/// Every field filled, with figures that no short decimal text holds; survey S1, gaugings G1 and G2.
RatingCurve curve(const std::vector<PinnedReach>& reach);
store::Publication publication(int replay);

/// A regular series in mm: `count` readings from `from`, `step_minutes` apart, values from `first_mm` rising
/// by one.
store::StageSeries series(const std::string& from, int count, std::int64_t first_mm, int step_minutes = 60,
                          std::int64_t first_line = 2);

// Each is one act; the number is returned.
std::int64_t add_ground(store::Book& book);  ///< station, gauge zero, reach, survey, gaugings, correction
std::int64_t add_stage(store::Book& book);   ///< 3 days over the end of January 2020, and an irregular day
std::int64_t add_curves(store::Book& book);  ///< 1, and 2 that descends from it
std::int64_t add_edition(store::Book& book);
std::int64_t add_publication(store::Book& book);  ///< with its replay
std::int64_t take(store::Book& book, const store::StageSeries& series, bool correct = false);

/// All of them, in that order.
void fill(store::Book& book);

}  // namespace full_book
