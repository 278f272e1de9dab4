#pragma once
// Lists as JSON text: recorded values with their times, runs of equal items, qualities. Written and read by
// hand, since a decade of stage has 350,000 values; any JSON reader can read them as well. What is read must
// be exactly what is written here: anything else throws StoreError damaged.

#include <cstdint>
#include <string>
#include <vector>

#include "store/stage.hpp"

namespace scourbook::store {

/// Values at rising times. Equally spaced (step_ms over 0): [948,null,951]; else, and for a single value,
/// [[ms after first_ms,948],...]. kMissing is null.
struct ValueText {
  std::int64_t first_ms = 0;
  std::int64_t step_ms = 0;
  std::string json;
};
[[nodiscard]] ValueText values_text(const std::vector<std::int64_t>& time_ms,
                                    const std::vector<std::int64_t>& value);
struct TimedValues {
  std::vector<std::int64_t> time_ms;
  std::vector<std::int64_t> value;
};
[[nodiscard]] TimedValues parse_values(const std::string& json, std::int64_t first_ms, std::int64_t step_ms);

/// An array of integers and nulls (kMissing).
[[nodiscard]] std::string integers_json(const std::vector<std::int64_t>& items);
[[nodiscard]] std::vector<std::int64_t> parse_integers(const std::string& json);

/// Runs of equal items: [[index of the first, item],...].
[[nodiscard]] std::string runs_json(const std::vector<std::int64_t>& items);
[[nodiscard]] std::vector<std::int64_t> parse_runs(const std::string& json, std::size_t count);

/// Runs of equal qualities by their words: [[0,"good"],...].
[[nodiscard]] std::string quality_runs_json(const std::vector<Quality>& items);
[[nodiscard]] std::vector<Quality> parse_quality_runs(const std::string& json, std::size_t count);

/// Runs of readings whose lines follow each other in one file: [[index of the first, file, line],...].
struct Place {
  std::int64_t file = 0;
  std::int64_t line = 0;
  friend bool operator==(const Place&, const Place&) = default;
};
[[nodiscard]] std::string line_runs_json(const std::vector<Place>& items);
[[nodiscard]] std::vector<Place> parse_line_runs(const std::string& json, std::size_t count);

}  // namespace scourbook::store
