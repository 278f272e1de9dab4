#pragma once
// Published figures from tests/outside/data: a note in the first line, a header in the second, then rows.

#include <cstddef>
#include <fstream>
#include <map>
#include <sstream>
#include <string>
#include <vector>

#include "hydraulics/section.hpp"
#include "terms/quantity.hpp"

namespace published {

using scourbook::hydraulics::SectionPart;
using scourbook::hydraulics::Strip;

/// One row by the names of its columns. No field holds a comma or a quote.
class Row {
 public:
  Row(const std::vector<std::string>& names, const std::string& line) {
    std::istringstream fields(line);
    for (const std::string& name : names) std::getline(fields, values_[name], ',');
  }
  [[nodiscard]] std::string text(const std::string& name) const { return values_.at(name); }
  [[nodiscard]] bool has(const std::string& name) const { return !values_.at(name).empty(); }
  [[nodiscard]] double number(const std::string& name) const { return std::stod(values_.at(name)); }
  [[nodiscard]] double number(const std::string& name, double otherwise) const {
    return has(name) ? number(name) : otherwise;
  }
  /// What to print beside a figure that does not agree.
  [[nodiscard]] std::string where() const {
    std::ostringstream out;
    out << text("id") << ' ' << text("asked") << ", " << text("source") << " (" << text("status") << ')';
    return out.str();
  }

 private:
  std::map<std::string, std::string> values_;
};

inline std::vector<Row> rows(const std::string& file) {
  std::ifstream in(std::string(SCOURBOOK_TESTS_DIR "/outside/data/") + file);
  REQUIRE(in);
  std::string line, name;
  REQUIRE(std::getline(in, line));
  REQUIRE(line.rfind("# ", 0) == 0);
  REQUIRE(std::getline(in, line));
  std::vector<std::string> names;
  for (std::istringstream header(line); std::getline(header, name, ',');) names.push_back(name);
  std::vector<Row> all;
  while (std::getline(in, line)) all.emplace_back(names, line);
  REQUIRE_FALSE(all.empty());
  return all;
}

/// Metres in the unit of length that the row is written in.
inline double metres_per_unit(const Row& row) {
  REQUIRE((row.text("length_unit") == "m" || row.text("length_unit") == "ft"));
  return row.text("length_unit") == "ft" ? scourbook::kMetresPerFoot : 1;
}

/// The row's trapezoid in metres, invert at 0, banks `height` high.
inline SectionPart trapezoid(double bottom, double bank_slope, double height) {
  const double out = bank_slope * height;
  return SectionPart(std::vector<Strip>{
      {0, height, out, 0}, {out, 0, out + bottom, 0}, {out + bottom, 0, 2 * out + bottom, height}});
}
inline SectionPart trapezoid(const Row& row) {
  const double m = metres_per_unit(row);
  return trapezoid(m * row.number("bottom"), row.number("bank_slope"), 100);
}

/// The x in [low, high] at which a rising function reaches `wanted`.
template <class Function>
double solve(Function function, double wanted, double low, double high) {
  for (int i = 0; i < 200; ++i) {
    const double middle = 0.5 * (low + high);
    (function(middle) < wanted ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

/// Checks a figure against its row's published value and tolerance.
inline void check(const Row& row, double value) {
  CAPTURE(row.where(), value);
  CHECK(std::abs(value - row.number("published")) <= row.number("tolerance"));
}

}  // namespace published
