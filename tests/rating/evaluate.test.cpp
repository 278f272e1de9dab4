// Level to flow and back, slopes, and what stands for the curve between its stored points.

#include "rating/evaluate.hpp"

#include "curves.hpp"
#include "hydraulics/power.hpp"

using namespace scourbook;
using namespace scourbook::rating;

namespace {

double flow_of(const ControlCoefficients& c, double z) {
  return z > c.h0_m ? c.flow_scale * hydraulics::reproducible_pow(z - c.h0_m, c.exponent) : 0;
}

TEST_CASE("one control: the power of the depth over its offset, nothing below") {
  const RatingCurve curve = made::one_channel();
  const ControlCoefficients& c = curve.controls[0];
  CHECK(control_flow(c, 99.5) == 0);
  CHECK(control_flow(c, 100.0) == 0);
  CHECK(control_flow(c, 101.0) == c.flow_scale);
  CHECK(control_flow(c, 102.0) == Approx(c.flow_scale * std::pow(2.0, 1.2 + 2.0 / 3)).epsilon(1e-14));
  CHECK(evaluate(curve, 99.9).discharge_m3s == 0);
  CHECK(evaluate(curve, 99.9).control == -1);
  CHECK(evaluate(curve, 102.0).discharge_m3s == control_flow(c, 102.0));
  CHECK(evaluate(curve, 102.0).control == 0);
}

TEST_CASE("section below the takeover, channel from there up, overbank flow added, all to the last bit") {
  const RatingCurve curve = made::three_controls();
  REQUIRE(curve.takeover_level_m);
  const double takeover = *curve.takeover_level_m;
  REQUIRE(takeover > 100.5);
  REQUIRE(takeover < 102.5);
  const auto& [section, channel, plain] = std::tie(curve.controls[0], curve.controls[1], curve.controls[2]);
  for (int i = 0; i <= 600; ++i) {
    const double z = 100 + 0.01 * i;
    CAPTURE(z);
    const Flow flow = evaluate(curve, z);
    const bool of_channel = z >= takeover;
    const double main = of_channel ? flow_of(channel, z) : std::min(flow_of(section, z), flow_of(channel, z));
    CHECK(flow.discharge_m3s == main + flow_of(plain, z));
    CHECK(flow.control == (main > 0 ? (of_channel ? 1 : 0) : -1));
  }
}

TEST_CASE("the takeover level itself belongs to the channel, and the flow is continuous there") {
  const RatingCurve curve = made::three_controls();
  const double takeover = *curve.takeover_level_m;
  CHECK(evaluate(curve, takeover).control == 1);
  CHECK(evaluate(curve, std::nextafter(takeover, 0)).control == 0);
  const double below = evaluate(curve, std::nextafter(takeover, 0)).discharge_m3s;
  CHECK(evaluate(curve, takeover).discharge_m3s == Approx(below).epsilon(1e-12));
}

TEST_CASE("without section and channel the highest overbank control that adds is named") {
  RatingCurve curve;
  curve.controls = {made::control(ControlKind::overbank, 101, 1, 0.5, 10),
                    made::control(ControlKind::overbank, 102, 1, 0.5, 20)};
  refresh(curve, 106);
  CHECK(cease_to_flow_m(curve) == 101);
  CHECK(evaluate(curve, 100.5).control == -1);
  CHECK(evaluate(curve, 101.5).control == 0);
  CHECK(evaluate(curve, 102.5).control == 1);
  CHECK(evaluate(curve, 102.5).discharge_m3s ==
        flow_of(curve.controls[0], 102.5) + flow_of(curve.controls[1], 102.5));
}

TEST_CASE("cease-to-flow: the higher of section and channel, unless a plain takes water before") {
  RatingCurve curve = made::three_controls();
  CHECK(cease_to_flow_m(curve) == 100.40);
  curve.controls[2].surveyed_h0_m = 100.2;
  refresh(curve, 106);
  CHECK(cease_to_flow_m(curve) == 100.2);
}

TEST_CASE("flow never falls as the level rises") {
  made::Random random(7);
  for (int round = 0; round < 200; ++round) {
    RatingCurve curve;
    curve.controls = {
        made::control(ControlKind::section, random.between(99.5, 101), random.between(0.6, 2.2), 1,
                      random.between(2, 20)),
        made::control(ControlKind::channel, random.between(99.5, 101), random.between(0.6, 2.2), 1,
                      random.between(1, 40)),
        made::control(ControlKind::overbank, random.between(100, 103), random.between(0.6, 2.2), 0.3, 20)};
    refresh(curve, 106);
    double last = 0;
    for (int i = 0; i <= 700; ++i) {
      const double flow = evaluate(curve, 99.4 + 0.01 * i).discharge_m3s;
      REQUIRE(flow >= last * (1 - 1e-12));
      last = flow;
    }
  }
}

TEST_CASE("level of a flow: the inverse, to a billionth of a metre") {
  const RatingCurve curve = made::three_controls();
  for (int i = 1; i <= 400; ++i) {
    const double z = 100.4 + 0.02 * i;
    CAPTURE(z);
    const auto level = level_of(curve, evaluate(curve, z).discharge_m3s);
    REQUIRE(level);
    CHECK(std::abs(*level - z) < 2e-9);
  }
  CHECK_FALSE(level_of(curve, 0));
  CHECK_FALSE(level_of(curve, -1));
  CHECK_FALSE(level_of(curve, std::nan("")));
  CHECK_FALSE(level_of(curve, evaluate(curve, 100.4 + 50).discharge_m3s * 1.01));
}

TEST_CASE("slope of ln Q against central differences; from above at the takeover; none without flow") {
  const RatingCurve curve = made::three_controls();
  const double step = 1e-6;
  const double takeover = *curve.takeover_level_m;
  for (int i = 1; i <= 300; ++i) {
    const double z = 100.41 + 0.0171 * i;
    if (std::abs(z - takeover) < 2 * step || std::abs(z - 103) < 2 * step) continue;
    CAPTURE(z);
    const double up = evaluate(curve, z + step).discharge_m3s, down = evaluate(curve, z - step).discharge_m3s;
    CHECK(log_slope(curve, z) == Approx(std::log(up / down) / (2 * step)).epsilon(2e-7));
  }
  const ControlCoefficients& channel = curve.controls[1];
  CHECK(log_slope(curve, takeover) == Approx(channel.exponent / (takeover - channel.h0_m)).epsilon(1e-14));
  CHECK(log_slope(curve, 100.4) == 0);
}

TEST_CASE("sd between the points of the band table, and beyond them") {
  RatingCurve curve = made::one_channel();
  curve.bands = {{100.1, 0.4}, {100.5, 0.2}, {102.5, 0.1}};
  CHECK(sd_ln_q(curve, 99) == 0.4);
  CHECK(sd_ln_q(curve, 100.1) == 0.4);
  CHECK(sd_ln_q(curve, 100.3) == Approx(0.3).epsilon(1e-12));
  CHECK(sd_ln_q(curve, 100.5) == 0.2);
  CHECK(sd_ln_q(curve, 102.0) == Approx(0.125).epsilon(1e-12));
  CHECK(sd_ln_q(curve, 102.5) == 0.1);
  CHECK(sd_ln_q(curve, 110) == 0.1);
}

// 100 (exp(1.96 sd) - 1).
TEST_CASE("95 % uncertainty in percent") {
  CHECK(u95_pct(0) == 0);
  CHECK(u95_pct(0.05) == Approx(10.2963).epsilon(1e-5));
  CHECK(u95_pct(0.5) == Approx(166.4456).epsilon(1e-6));
}

}  // namespace
