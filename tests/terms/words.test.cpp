#include "terms/curve.hpp"
#include "terms/history.hpp"
#include "terms/nearest.hpp"
#include "terms/quality.hpp"
#include "terms/records.hpp"

using namespace scourbook;

TEST_CASE("words read back as the value they stand for") {
  for (int i = 0; i < 6; ++i) {
    CHECK(parse_quality(word(static_cast<Quality>(i))) == static_cast<Quality>(i));
    CHECK(parse_fate(word(static_cast<Fate>(i))) == static_cast<Fate>(i));
  }
  for (int i = 0; i < 3; ++i) {
    CHECK(parse_control(word(static_cast<ControlKind>(i))) == static_cast<ControlKind>(i));
    CHECK(parse_flow_law(word(static_cast<FlowLaw>(i))) == static_cast<FlowLaw>(i));
  }
  for (int i = 0; i < 5; ++i) CHECK(parse_no_curve(word(static_cast<NoCurve>(i))) == static_cast<NoCurve>(i));
}

TEST_CASE("words of stored numbers never change") {
  CHECK(word(Quality::good) == "good");
  CHECK(word(Quality::unchecked) == "unchecked");
  CHECK(word(Quality::estimate) == "estimate");
  CHECK(word(Quality::suspect) == "suspect");
  CHECK(word(Quality::poor) == "poor");
  CHECK(word(Quality::missing) == "missing");
  CHECK(word(Fate::fresh) == "new");
  CHECK(word(GaugingUse::left_out) == "left out");
  CHECK(word(GaugingUse::weighted_down) == "weighted down");
  CHECK(word(CurveForm::conveyance) == "conveyance");
  CHECK(word(HoldPolicy::velocity_scale) == "velocity-scale");
  CHECK(word(NoCurve::backwater) == "backwater");
}

TEST_CASE("what is no word is none") {
  CHECK_FALSE(parse_quality("Good").has_value());
  CHECK_FALSE(parse_quality("").has_value());
  CHECK_FALSE(parse_control("canal").has_value());
  CHECK_FALSE(parse_flow_law("strickler").has_value());
  CHECK_FALSE(parse_fate("kept").has_value());
  CHECK_FALSE(parse_no_curve("none").has_value());
}

TEST_CASE("flags are written in the order of their bits") {
  CHECK(words(0).empty());
  CHECK(words(bit(Flag::gap)) == "gap");
  CHECK(words(static_cast<Flags>(bit(Flag::inferred) | bit(Flag::above_gauged))) == "above-gauged inferred");
  CHECK(words(0x3FF) ==
        "below-gauged above-gauged above-surveyed no-flow blended shifted inferred carried estimated gap");
}

TEST_CASE("a gauging stands for the middle of its times and the mean of its stages") {
  Gauging gauging;
  gauging.start = from_ms(1000);
  gauging.stage = Stage::from_ticks(3);
  CHECK(gauging.middle() == from_ms(1000));
  CHECK(gauging.mean_stage() == Stage::from_ticks(3));
  gauging.end = from_ms(4000);
  gauging.stage_end = Stage::from_ticks(5);
  CHECK(gauging.middle() == from_ms(2500));
  CHECK(gauging.mean_stage() == Stage::from_ticks(4));
  gauging.stage_end = Stage::from_ticks(4);
  CHECK(gauging.mean_stage() == Stage::from_ticks(4));  // 3.5, away from zero
  gauging.stage = Stage::from_ticks(-3);
  gauging.stage_end = Stage::from_ticks(-4);
  CHECK(gauging.mean_stage() == Stage::from_ticks(-4));
}

TEST_CASE("edit distance counts insertions, deletions, replacements and swaps") {
  CHECK(edit_distance("", "abc") == 3);
  CHECK(edit_distance("kitten", "sitting") == 3);
  CHECK(edit_distance("stage", "satge") == 1);
  CHECK(edit_distance("Stage", "stage") == 0);
  CHECK(edit_distance("part", "parts") == 1);
}

TEST_CASE("the nearest word is near") {
  const std::vector<std::string> known{"manning", "chezy", "critical"};
  CHECK(nearest_word("maning", known) == "manning");
  CHECK(nearest_word("chézy", known) == "chezy");
  CHECK(nearest_word("critcial", known) == "critical");
  CHECK(nearest_word("weir", known).empty());
  CHECK(nearest_word("", known).empty());
  CHECK(nearest_word(std::string(100, 'x'), known).empty());
}
