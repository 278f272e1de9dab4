// Lists as text: what is written is read back, and nothing else is read.

#include "store/value_text.hpp"

#include <catch2/catch.hpp>
#include <random>

#include "store/error.hpp"
#include "store/piece.hpp"

using namespace scourbook;
using namespace scourbook::store;

namespace {

using Integers = std::vector<std::int64_t>;

bool is_damage(const std::function<void()>& work) {
  try {
    work();
  } catch (const StoreError& error) {
    return error.kind() == StoreError::Kind::damaged;
  }
  return false;
}

}  // namespace

TEST_CASE("values at equal steps are a plain array, others are pairs") {
  const ValueText regular = values_text({1000, 1900, 2800}, {948, kMissing, -3});
  CHECK(regular.json == "[948,null,-3]");
  CHECK(regular.first_ms == 1000);
  CHECK(regular.step_ms == 900);
  const ValueText irregular = values_text({1000, 1900, 2801}, {948, kMissing, -3});
  CHECK(irregular.json == "[[0,948],[900,null],[1801,-3]]");
  CHECK(irregular.step_ms == 0);
  CHECK(values_text({5}, {7}).json == "[[0,7]]");
  CHECK(values_text({}, {}).json == "[]");
  CHECK(values_text({-2000, -1000}, {1, 2}).first_ms == -2000);
}

TEST_CASE("runs name the first reading of each") {
  CHECK(runs_json({5, 5, 7, 7, 5}) == "[[0,5],[2,7],[4,5]]");
  CHECK(runs_json({}) == "[]");
  CHECK(quality_runs_json({Quality::good, Quality::good, Quality::missing}) ==
        R"([[0,"good"],[2,"missing"]])");
  CHECK(line_runs_json({{3, 7}, {3, 8}, {3, 10}, {4, 11}}) == "[[0,3,7],[2,3,10],[3,4,11]]");
}

TEST_CASE("what is written is read back, over random lists") {
  std::mt19937_64 random(20240501);
  const auto below = [&](std::int64_t limit) {
    return static_cast<std::int64_t>(random() % std::uint64_t(limit));
  };
  for (int round = 0; round < 400; ++round) {
    const auto count = static_cast<std::size_t>(below(60));
    const bool regular = round % 2 == 0;
    Integers times, values, few;
    std::vector<Quality> qualities;
    std::vector<Place> places;
    std::int64_t time = below(4'000'000'000'000) - 2'000'000'000'000;
    const std::int64_t step = 1 + below(1'000'000);
    for (std::size_t i = 0; i < count; ++i) {
      times.push_back(time += regular ? step : 1 + below(5));
      values.push_back(below(9) == 0 ? kMissing : below(2'000'000) - 1'000'000);
      few.push_back(below(3));
      qualities.push_back(static_cast<Quality>(below(6)));
      const bool next = below(4) > 0 && !places.empty();
      places.push_back(next ? Place{places.back().file, places.back().line + 1}
                            : Place{below(9), below(1000)});
    }
    CAPTURE(round, count);
    const ValueText text = values_text(times, values);
    const TimedValues read = parse_values(text.json, text.first_ms, text.step_ms);
    CHECK(read.time_ms == times);
    CHECK(read.value == values);
    CHECK(parse_integers(integers_json(values)) == values);
    CHECK(parse_runs(runs_json(few), count) == few);
    CHECK(parse_quality_runs(quality_runs_json(qualities), count) == qualities);
    CHECK(parse_line_runs(line_runs_json(places), count) == places);
  }
}

TEST_CASE("the extremes of a whole number are read back") {
  const Integers extremes = {INT64_MAX, INT64_MIN + 1, 0, -1};
  CHECK(parse_integers(integers_json(extremes)) == extremes);
}

TEST_CASE("any other text is damage") {
  for (const std::string text :
       {"", "[", "]", "[1", "[1,", "[1,]", "[,1]", "[1 ]", "[ 1]", "[1.5]", "[1]x", "[nul]", "[\"1\"]",
        "[+1]", "[99999999999999999999]", "1", "{}", "[1,2]]", "[-]"}) {
    CAPTURE(text);
    CHECK(is_damage([&] { (void)parse_integers(text); }));
    CHECK(is_damage([&] { (void)parse_values(text, 0, 1000); }));
  }
  for (const std::string text : {"[1]", "[[0,1]", "[[0]]", "[[0,1,2]]", "[[5,1],[5,2]]", "[[5,1],[4,2]]",
                                 "[[null,1]]x", "[[9223372036854775807,1]]"}) {
    CAPTURE(text);
    CHECK(is_damage([&] { (void)parse_values(text, 1'000, 0); }));
  }
  CHECK(is_damage([] { (void)parse_values("[1,2,3]", INT64_MAX - 5, 1000); }));
  CHECK(is_damage([] { (void)parse_values("[1,2,3]", 0, INT64_MAX); }));
}

TEST_CASE("runs that do not fit their readings are damage") {
  for (const std::string text : {"", "[]", "[[1,5]]", "[[0,5],[0,6]]", "[[0,5],[3,6]]", "[[0,5],[2,6],[1,7]]",
                                 "[[-1,5]]", "[[0,5]", "[[0]]", "[[0,5],]", "[[0,5]]x"}) {
    CAPTURE(text);
    CHECK(is_damage([&] { (void)parse_runs(text, 3); }));
  }
  CHECK(is_damage([] { (void)parse_runs("[[0,1]]", 0); }));
  CHECK(is_damage([] { (void)parse_quality_runs(R"([[0,"gold"]])", 1); }));
  CHECK(is_damage([] { (void)parse_quality_runs(R"([[0,"good]])", 1); }));
  CHECK(is_damage([] { (void)parse_quality_runs("[[0,1]]", 1); }));
  CHECK(is_damage([] { (void)parse_line_runs("[[0,1]]", 1); }));
  CHECK(is_damage([] { (void)parse_line_runs("[[0,1,9223372036854775807]]", 2); }));
}

TEST_CASE("recorded numbers become ticks of 1e-8 m exactly") {
  // 1 ft = 0.3048 m exactly: the international foot, 1959 (common practice; US National Bureau of Standards,
  // Federal Register 24, 1959, from memory).
  CHECK(ticks_of(948, StageUnit::metre, 3) == 94'800'000);
  CHECK(ticks_of(-1, StageUnit::metre, 8) == -1);
  CHECK(ticks_of(3, StageUnit::metre, 0) == 300'000'000);
  CHECK(ticks_of(1, StageUnit::foot, 0) == 30'480'000);
  CHECK(ticks_of(123, StageUnit::foot, 2) == 37'490'400);
  CHECK(ticks_of(12'345, StageUnit::foot, 4) == 37'627'560);
  CHECK(ticks_of(-12'345, StageUnit::foot, 4) == -37'627'560);
  CHECK(ticks_of(1, StageUnit::foot, 5) == 305);    // 304.8
  CHECK(ticks_of(5, StageUnit::foot, 6) == 152);    // 152.4
  CHECK(ticks_of(125, StageUnit::foot, 8) == 38);   // 38.1
  CHECK(ticks_of(625, StageUnit::foot, 8) == 191);  // 190.5, half away from zero
  CHECK(ticks_of(-625, StageUnit::foot, 8) == -191);
  CHECK(ticks_of(kMissing, StageUnit::metre, 3) == kMissing);
  CHECK(ticks_of(kMissing, StageUnit::foot, 3) == kMissing);
  for (int decimals = 0; decimals <= 8; ++decimals) {
    std::int64_t one = 1;
    for (int i = 0; i < decimals; ++i) one *= 10;
    CHECK(ticks_of(one, StageUnit::metre, decimals) == 100'000'000);
    CHECK(ticks_of(-90 * one, StageUnit::foot, decimals) == -90 * 30'480'000LL);
  }
}

TEST_CASE("a piece holds its readings, and its digest is over every column") {
  Piece piece;
  piece.id = 3;
  piece.act = 4;
  piece.station = "S";
  piece.month = 24241;
  piece.file = 2;
  piece.span_first_ms = 1000;
  piece.span_last_ms = 4000;
  piece.decimals = 3;
  const std::vector<PieceReading> readings = {{1000, 5, Quality::good, 2, 7},
                                              {3000, kMissing, Quality::missing, 2, 9}};
  encode(readings, piece);
  CHECK(piece.count == 2);
  const auto read = readings_of(piece);
  REQUIRE(read.size() == 2);
  CHECK(read[1].time_ms == 3000);
  CHECK(read[1].value == kMissing);
  CHECK(read[1].quality == Quality::missing);
  CHECK(read[1].file == 2);
  CHECK(read[1].line == 9);
  const std::string digest = digest_of(piece);
  std::vector<Piece> changed(16, piece);
  changed[0].id = 4;
  changed[1].act = 5;
  changed[2].station = "T";
  changed[3].month = 1;
  changed[4].merged = true;
  changed[5].file = 9;
  changed[6].span_first_ms = 0;
  changed[7].span_last_ms = 0;
  changed[8].first_ms = 0;
  changed[9].step_ms = 7;
  changed[10].count = 7;
  changed[11].unit = StageUnit::foot;
  changed[12].decimals = 2;
  changed[13].values += " ";
  changed[14].quality_runs += " ";
  changed[15].line_runs += " ";
  for (const Piece& other : changed) CHECK(digest_of(other) != digest);
  piece.span_last_ms = 2000;
  CHECK(is_damage([&] { (void)decode(piece); }));
  piece.span_last_ms = 4000;
  piece.count = 3;
  CHECK(is_damage([&] { (void)decode(piece); }));
}
