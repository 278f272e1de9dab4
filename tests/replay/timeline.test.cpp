#include "replay/timeline.hpp"

#include <catch2/catch.hpp>

using namespace scourbook;
using replay::Timeline;

namespace {

Period period(std::optional<int> curve, std::int64_t from, std::optional<std::int64_t> until,
              std::int64_t blend = 0) {
  Period made;
  made.from = from_ms(from);
  if (until) made.until = from_ms(*until);
  made.curve = curve;
  made.blend = Millis(blend);
  return made;
}

std::map<int, RatingCurve> curves() {
  std::map<int, RatingCurve> all;
  for (int number = 1; number <= 3; ++number) all[number].number = number;
  return all;
}

/// "2", "1>2 0.25" inside a blend, "-" where there is none.
std::string holder(const Timeline& timeline, std::int64_t time) {
  const auto* stretch = timeline.at(time);
  if (stretch == nullptr) return "-";
  const std::string in = std::to_string(stretch->curve->number);
  if (stretch->outgoing == nullptr) return in;
  return std::to_string(stretch->outgoing->number) + ">" + in + " " +
         std::to_string(stretch->weight(time)).substr(0, 4);
}

}  // namespace

TEST_CASE("a time line says which curve holds at a time, and from which it passes") {
  const Timeline timeline(
      {period(1, 0, 100), period(2, 100, 200, 20), period({}, 200, 250), period(3, 250, 300, 10),
       period(1, 320, 330, 40), period(2, 330, 340, 40), period(3, 340, {})},
      curves());
  CHECK(holder(timeline, -1) == "-");
  CHECK(holder(timeline, 0) == "1");
  CHECK(holder(timeline, 99) == "1");
  CHECK(holder(timeline, 100) == "1>2 0.00");
  CHECK(holder(timeline, 115) == "1>2 0.75");
  CHECK(holder(timeline, 120) == "2");
  CHECK(holder(timeline, 199) == "2");
  CHECK(holder(timeline, 200) == "-");
  CHECK(holder(timeline, 250) == "3");  // nothing to pass from after a time without a curve
  CHECK(holder(timeline, 300) == "-");
  CHECK(holder(timeline, 320) == "1");  // nor after a gap
  CHECK(holder(timeline, 330) == "1>2 0.00");
  CHECK(holder(timeline, 339) == "1>2 0.22");  // the weights of the whole blend, though the period is cut
  CHECK(holder(timeline, 340) == "3");
  CHECK(holder(timeline, INT64_MAX - 1) == "3");
  CHECK(timeline.boundaries() == std::vector<std::int64_t>{0, 100, 200, 250, 300, 320, 330, 340});
}

TEST_CASE("an empty time line holds nothing") {
  const Timeline timeline({}, {});
  CHECK(holder(timeline, 0) == "-");
  CHECK(timeline.boundaries().empty());
}
