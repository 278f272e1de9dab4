// Where the channel takes over from the section: against a plain search, level by level.

#include "curves.hpp"
#include "rating/evaluate.hpp"

using namespace scourbook;
using namespace scourbook::rating;

namespace {

struct Pair {
  ControlCoefficients section, channel;
};

Pair pair(double hs, double as, double ps, double hc, double ac, double pc) {
  Pair made{made::control(ControlKind::section, hs, 1, 1, 1),
            made::control(ControlKind::channel, hc, 1, 1, 1)};
  made.section.h0_m = hs;
  made.section.flow_scale = as;
  made.section.exponent = ps;
  made.channel.h0_m = hc;
  made.channel.flow_scale = ac;
  made.channel.exponent = pc;
  return made;
}

/// The lowest step of a fine ladder where the section's flow passes from below the channel's to not below it.
std::optional<double> by_search(const Pair& p, double top) {
  const double from = std::max(p.section.h0_m, p.channel.h0_m);
  constexpr int kSteps = 20000;
  bool section_governed = false;
  for (int i = 1; i <= kSteps; ++i) {
    const double z = from + (top - from) * i / kSteps;
    const bool section_smaller = control_flow(p.section, z) < control_flow(p.channel, z);
    if (section_governed && !section_smaller) return z;
    section_governed = section_smaller;
  }
  return {};
}

TEST_CASE("two power laws of equal exponent and offset never cross") {
  const Pair section_less = pair(100, 3, 1.6, 100, 5, 1.6), channel_less = pair(100, 5, 1.6, 100, 3, 1.6);
  CHECK_FALSE(find_takeover(section_less.section, section_less.channel, 110));
  CHECK_FALSE(find_takeover(channel_less.section, channel_less.channel, 110));
}

// Equal offsets: A_s d^p_s = A_c d^p_c at d = (A_c / A_s)^(1 / (p_s - p_c)).
TEST_CASE("equal offsets: the crossing in closed form") {
  const Pair p = pair(100, 5, 2.0, 100, 10, 1.5);
  const auto found = find_takeover(p.section, p.channel, 110);
  REQUIRE(found);
  CHECK(*found == Approx(104).epsilon(1e-14));
}

TEST_CASE("a crossing beyond the top is none") {
  const Pair p = pair(100, 5, 2.0, 100, 10, 1.5);
  CHECK_FALSE(find_takeover(p.section, p.channel, 103.9));
  CHECK(find_takeover(p.section, p.channel, 104.1));
}

TEST_CASE("several crossings: the lowest from section to channel") {
  // The section governs from its own offset, the channel above; far up the section falls behind again.
  const Pair p = pair(100.5, 12, 1.5, 100, 4, 1.9);
  const auto found = find_takeover(p.section, p.channel, 200);
  REQUIRE(found);
  CHECK(*found == Approx(*by_search(p, 130)).margin(2e-3));
  CHECK(control_flow(p.section, *found + 80) < control_flow(p.channel, *found + 80));
  RatingCurve curve;
  curve.controls = {p.section, p.channel};
  curve.takeover_level_m = found;
  CHECK(evaluate(curve, *found + 80).control == 1);  // above the takeover the channel governs to the top
}

TEST_CASE("a channel that governs at the bottom only because its offset is higher does not count") {
  // Channel first (higher offset), then the section, then the channel: the takeover is the second crossing.
  const Pair p = pair(100.0, 2, 1.9, 100.2, 5, 1.4);
  const auto found = find_takeover(p.section, p.channel, 120);
  REQUIRE(found);
  CHECK(control_flow(p.channel, 100.21) < control_flow(p.section, 100.21));
  CHECK(control_flow(p.section, *found - 0.1) < control_flow(p.channel, *found - 0.1));
  CHECK(control_flow(p.section, *found + 0.1) > control_flow(p.channel, *found + 0.1));
  // Channel first and then the section for good: none.
  const Pair never = pair(100.0, 2, 1.4, 100.2, 5, 1.9);
  CHECK_FALSE(find_takeover(never.section, never.channel, 150));
  // Channel at every level: none.
  const Pair always = pair(100.0, 50, 1.6, 100.2, 2, 1.5);
  CHECK_FALSE(find_takeover(always.section, always.channel, 120));
}

TEST_CASE("a thousand random pairs against a search level by level") {
  made::Random random(11);
  int with = 0, without = 0;
  for (int i = 0; i < 1000; ++i) {
    const Pair p = pair(random.between(99.5, 101), random.between(1, 20), random.between(1.2, 2.8),
                        random.between(99.5, 101), random.between(1, 20), random.between(1.2, 2.8));
    const double top = 106;
    CAPTURE(p.section.h0_m, p.section.flow_scale, p.section.exponent);
    CAPTURE(p.channel.h0_m, p.channel.flow_scale, p.channel.exponent);
    const auto found = find_takeover(p.section, p.channel, top);
    const auto expected = by_search(p, top);
    // The ladder's first step and last step are 3e-4 m wide: a crossing inside them is not seen by it.
    if (!expected && found) {
      const double from = std::max(p.section.h0_m, p.channel.h0_m);
      CHECK((*found < from + 4e-4 || *found > top - 4e-4));
      continue;
    }
    REQUIRE(found.has_value() == expected.has_value());
    if (found) CHECK(*found == Approx(*expected).margin(4e-4));
    (found ? with : without) += 1;
  }
  CHECK(with > 100);
  CHECK(without > 100);
}

}  // namespace
