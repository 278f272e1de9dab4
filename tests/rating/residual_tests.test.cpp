// Tests of deviations: cases counted by hand, and the runs against all orders of a few signs.

#include "rating/residual_tests.hpp"

#include <algorithm>
#include <cmath>
#include <catch2/catch.hpp>

using namespace scourbook::rating;

namespace {

TEST_CASE("sign test: even splits prove nothing, six of six do") {
  CHECK(sign_test_p(5, 10) == 1);
  CHECK(sign_test_p(3, 6) == 1);
  CHECK(sign_test_p(0, 6) == Approx(2.0 / 64));
  CHECK(sign_test_p(6, 6) == Approx(2.0 / 64));
  CHECK(sign_test_p(1, 5) == Approx(12.0 / 32));
  CHECK(sign_test_one_sided_p(0, 6) == 1);
}

TEST_CASE("runs are counted over zeros") {
  CHECK(count_runs({}) == 0);
  CHECK(count_runs({0, 0}) == 0);
  CHECK(count_runs({1, 2, 0, 3}) == 1);
  CHECK(count_runs({1, 0, -2, -3, 4}) == 3);
}

TEST_CASE("no deviate of runs without both signs or without variance") {
  CHECK_FALSE(runs_z(1, 0, 5));
  CHECK_FALSE(runs_z(1, 5, 0));
  CHECK_FALSE(runs_z(2, 1, 1));
  CHECK(runs_z(4, 2, 4));
}

TEST_CASE("probability of runs against counting every order of the signs") {
  for (int n1 = 1; n1 <= 6; ++n1) {
    for (int n2 = 1; n2 <= 5; ++n2) {
      std::vector<double> signs(static_cast<std::size_t>(n2), -1);
      signs.insert(signs.end(), static_cast<std::size_t>(n1), 1);
      std::vector<int> counts;
      do {
        counts.push_back(count_runs(signs));
      } while (std::next_permutation(signs.begin(), signs.end()));
      for (int runs = 1; runs <= n1 + n2; ++runs) {
        const auto share = [&](auto belongs) {
          return static_cast<double>(std::count_if(counts.begin(), counts.end(), belongs)) /
                 static_cast<double>(counts.size());
        };
        const double few = share([&](int u) { return u <= runs; }),
                     many = share([&](int u) { return u >= runs; });
        CAPTURE(n1, n2, runs);
        CHECK(runs_p(runs, n1, n2) == Approx(std::min(1.0, 2 * std::min(few, many))).margin(1e-12));
      }
    }
  }
}

TEST_CASE("Student's t by hand; none without spread") {
  CHECK_FALSE(student_t({}));
  CHECK_FALSE(student_t({1}));
  CHECK_FALSE(student_t({2, 2, 2}));
  CHECK(*student_t({1, 2, 3}) == Approx(2 / (1 / std::sqrt(3.0))));
  CHECK(*student_t({-1, 0, 1}) == Approx(0).margin(1e-15));
}

}  // namespace
