// Figures as published against decimal strings: the exact decimal expansion of a double, rounded by hand.

#include <fmt/format.h>

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>

#include "publish/rounding.hpp"

using namespace scourbook;
using publish::as_published;
using publish::format_published;

namespace {

store::Settings rule(std::int64_t digits, std::int64_t decimals) {
  store::Settings settings;
  settings.published_digits = digits;
  settings.published_decimals = decimals;
  return settings;
}

/// Rounds the digits of `value` (all its decimals, of which a double has at most 1074): the digit after the
/// last one kept decides.
std::int64_t by_digits(double value, std::int64_t digits, std::int64_t decimals) {
  const std::string text = fmt::format("{:.1080f}", value);
  const std::size_t point = text.find('.');
  std::string all = text.substr(0, point) + text.substr(point + 1);
  const std::size_t first = all.find_first_not_of('0');
  if (first == std::string::npos) return 0;
  const std::size_t kept =
      std::min(first + static_cast<std::size_t>(digits), point + static_cast<std::size_t>(decimals));
  const bool up = all[kept] >= '5';
  all = "0" + all.substr(0, kept);  // room for a carry
  for (std::size_t i = all.size(); up && i-- > 0;) {
    if (all[i] != '9') {
      ++all[i];
      break;
    }
    all[i] = '0';
  }
  all.resize(1 + point + static_cast<std::size_t>(decimals), '0');
  return std::stoll(all);
}

}  // namespace

TEST_CASE("figures worked out by hand") {
  const auto usual = rule(3, 3);
  CHECK(as_published(0, usual) == 0);
  CHECK(as_published(9.995, usual) == 9'990);  // the double is 9.99499999999999921...
  CHECK(as_published(std::nextafter(9.995, 10), usual) == 10'000);
  CHECK(as_published(0.0004, usual) == 0);
  CHECK(as_published(0.0005, usual) == 1);  // the double is 0.000500000000000000010...
  CHECK(as_published(0.00049999, usual) == 0);
  CHECK(as_published(999.5, usual) == 1'000'000);
  CHECK(as_published(std::nextafter(999.5, 0), usual) == 999'000);
  CHECK(as_published(12.25, usual) == 12'300);  // a half, exactly: away from zero
  CHECK(as_published(12.35, usual) == 12'300);  // the double is 12.3499999999999996...
  CHECK(as_published(1235, usual) == 1'240'000);
  CHECK(as_published(1234.9999999999, usual) == 1'230'000);
  CHECK(as_published(123'456, usual) == 123'000'000);
  CHECK(as_published(0.0456, usual) == 46);
  CHECK(as_published(4.35, rule(2, 3)) ==
        4'300);  // 4.3499999999999996..., though 10 x 4.35 is 43.5 in doubles
  CHECK(as_published(0.49999999999999994, rule(3, 0)) == 0);  // + 0.5 would be 1 in doubles
  CHECK(as_published(5e-324, usual) == 0);
}

TEST_CASE("a flow beyond all rivers is cut") {
  CHECK(as_published(9.99e11, rule(3, 3)) == 999'000'000'000'000);
  CHECK(as_published(1e15, rule(3, 3)) == publish::kMostUnits);
  CHECK(as_published(1e300, rule(3, 3)) == publish::kMostUnits);
  CHECK(as_published(std::numeric_limits<double>::max(), rule(3, 0)) == publish::kMostUnits);
  CHECK(as_published(9.99e8, rule(3, 9)) == 999'000'000'000'000'000);
}

TEST_CASE("random flows over twelve decades agree with rounding their digits") {
  std::mt19937_64 engine(7);
  std::uniform_real_distribution<double> exponent(-6, 6);
  for (int i = 0; i < 5'000; ++i) {
    const auto digits = static_cast<std::int64_t>(1 + engine() % 6);
    const auto decimals = static_cast<std::int64_t>(engine() % 7);
    const double value = std::pow(10, exponent(engine));
    CAPTURE(i, value, digits, decimals);
    REQUIRE(as_published(value, rule(digits, decimals)) == by_digits(value, digits, decimals));
  }
}

TEST_CASE("flows at and beside a half agree with rounding their digits") {
  std::mt19937_64 engine(8);
  for (int i = 0; i < 5'000; ++i) {
    // A short decimal that ends in 5, and its neighbours among doubles.
    const double places = std::pow(10, static_cast<double>(engine() % 7));
    const double middle = (10 * static_cast<double>(engine() % 1000) + 5) / places;
    const auto digits = static_cast<std::int64_t>(1 + engine() % 4);
    const auto decimals = static_cast<std::int64_t>(engine() % 5);
    for (const double value : {middle, std::nextafter(middle, 0), std::nextafter(middle, 1e9)}) {
      CAPTURE(i, value, digits, decimals);
      REQUIRE(as_published(value, rule(digits, decimals)) == by_digits(value, digits, decimals));
    }
  }
}

TEST_CASE("a figure is written with the decimals that its size has") {
  CHECK(format_published(12'300, 3, 3) == "12.3");
  CHECK(format_published(45, 3, 3) == "0.045");
  CHECK(format_published(1'230'000, 3, 3) == "1230");
  CHECK(format_published(10'000, 3, 3) == "10.0");
  CHECK(format_published(9'990, 3, 3) == "9.99");
  CHECK(format_published(100, 3, 3) == "0.100");
  CHECK(format_published(0, 3, 3) == "0.000");
  CHECK(format_published(7, 0, 3) == "7");
  CHECK(format_published(123'456, 3, 6) == "123.456");
  CHECK(format_published(4'300, 3, 2) == "4.3");
}

TEST_CASE("what is written reads back as the figure") {
  std::mt19937_64 engine(9);
  std::uniform_real_distribution<double> exponent(-4, 6);
  for (int i = 0; i < 5'000; ++i) {
    const auto digits = static_cast<std::int64_t>(1 + engine() % 6);
    const auto decimals = static_cast<int>(engine() % 7);
    const auto units = as_published(std::pow(10, exponent(engine)), rule(digits, decimals));
    std::string text = format_published(units, decimals, digits);
    CAPTURE(i, units, digits, decimals, text);
    const std::size_t point = text.find('.');
    const std::size_t after = point == std::string::npos ? 0 : text.size() - point - 1;
    if (point != std::string::npos) text.erase(point, 1);
    REQUIRE(after <= static_cast<std::size_t>(decimals));
    text.append(static_cast<std::size_t>(decimals) - after, '0');
    REQUIRE(std::stoll(text) == units);
  }
}

TEST_CASE("u95 in tenths of a percent") {
  CHECK(publish::u95_tenth_pct(0) == 0);
  CHECK(publish::u95_tenth_pct(0.05) == 103);  // 100 (exp(1.96 x 0.05) - 1) = 10.296...
  CHECK(publish::u95_tenth_pct(0.1) == 217);   // 21.652...
  CHECK(publish::u95_tenth_pct(10) == 99'999);
  CHECK(publish::u95_tenth_pct(1e6) == 99'999);
}
