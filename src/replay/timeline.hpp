#pragma once
// An edition laid out in time: stretches within which every flow is found in the same way.

#include <cstdint>
#include <map>
#include <vector>

#include "terms/curve.hpp"
#include "terms/history.hpp"

namespace scourbook::replay {

/// [from, until) of a period that has a curve, wholly inside or wholly outside its blend.
struct Stretch {
  std::int64_t from_ms = 0;
  std::int64_t until_ms = 0;
  const RatingCurve* curve = nullptr;  ///< of the period
  const RatingCurve* outgoing =
      nullptr;  ///< inside a blend: the curve of the period that ends where this one begins
  std::int64_t blend_from_ms = 0;  ///< read only with `outgoing`
  std::int64_t blend_ms = 0;

  /// Weight of the incoming curve: (t - from) / blend, linear in time.
  [[nodiscard]] double weight(std::int64_t time_ms) const {
    return static_cast<double>(time_ms - blend_from_ms) / static_cast<double>(blend_ms);
  }
};

class Timeline {
 public:
  /// `curves` holds every curve of `periods` (by rising time, disjoint). A blend with no curve just before it
  /// is none.
  Timeline(const std::vector<Period>& periods, std::map<int, RatingCurve> curves);
  Timeline(const Timeline&) = delete;  // the stretches point into it
  Timeline& operator=(const Timeline&) = delete;

  [[nodiscard]] const std::vector<Stretch>& stretches() const { return stretches_; }
  /// The stretch that holds `time_ms`; null where no curve is in force. The stretch just before a boundary:
  /// at(boundary - 1).
  [[nodiscard]] const Stretch* at(std::int64_t time_ms) const;
  /// Every begin and end of a period, with or without a curve, rising, each once.
  [[nodiscard]] const std::vector<std::int64_t>& boundaries() const { return boundaries_; }

 private:
  std::map<int, RatingCurve> curves_;
  std::vector<Stretch> stretches_;
  std::vector<std::int64_t> boundaries_;
};

}  // namespace scourbook::replay
