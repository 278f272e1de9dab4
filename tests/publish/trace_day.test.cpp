// The chain behind a day mean by hand; and both traces over a case that holds everything a replay must get
// right.

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#include "publish/trace.hpp"
#include "replay/definitions.hpp"
#include "small_book.hpp"

using namespace small_book;

namespace {

publish::TracedDay trace(const store::Book& book, const std::string& time) {
  return publish::trace_day(book, {kStation, at(time), {}, {}, {}});
}

/// Curve 1 until noon of the 2nd, then curve 2 at once. Depth 1 m at midnight, 2 m a day later, and 2 m from
/// then on.
SmallBook with_step() {
  return SmallBook({period(1, "2020-01-01T00:00Z", "2020-01-02T12:00Z"), period(2, "2020-01-02T12:00Z", "")},
                   {reading("2020-01-02T00:00Z", 1000), reading("2020-01-03T00:00Z", 2000),
                    reading("2020-01-03T20:00Z", 2000)},
                   {}, with_gap(1440));
}

}  // namespace

TEST_CASE("the pieces of a day, cut at its ends and at a boundary") {
  auto small = with_step();
  const auto traced = trace(small.book, "2020-01-02T15:00Z");
  CHECK(format_day(traced.day) == "2020-01-02");
  REQUIRE(traced.pieces.size() == 2);
  CHECK(traced.pieces[0].from == at("2020-01-02T00:00Z"));
  CHECK(traced.pieces[0].until == at("2020-01-02T12:00Z"));
  CHECK(traced.pieces[0].from_m3s == Approx(1).epsilon(1e-14));
  CHECK(traced.pieces[0].until_m3s == Approx(1.5).epsilon(1e-14));
  CHECK(traced.pieces[0].curve == 1);
  CHECK(traced.pieces[1].from_m3s == Approx(3).epsilon(1e-14));
  CHECK(traced.pieces[1].until_m3s == Approx(4).epsilon(1e-14));
  CHECK(traced.pieces[1].curve == 2);
  CHECK(traced.mean_m3s.value() == Approx((1.25 + 3.5) / 2).epsilon(1e-14));
  CHECK(traced.share == 1);
  CHECK(traced.agrees());
  REQUIRE(traced.curves.size() == 2);
  CHECK(traced.curves[0].curve.number == 1);
  CHECK(traced.curves[0].survey_file == "ground.csv");
  CHECK(traced.files == std::vector<std::string>{"stage.csv"});
  CHECK(!traced.publication);
  CHECK(traced.recomputed_units == 2380);  // 2.375
  std::vector<std::int64_t> acts;
  for (const auto& act : traced.acts) acts.push_back(act.number);
  CHECK(acts == std::vector<std::int64_t>{2, 3, 4, 5});
}

TEST_CASE("a day of too small a share has no mean, and one with a gap says so") {
  auto small = with_step();
  const auto part = trace(small.book, "2020-01-03T00:00Z");
  CHECK(part.share == Approx(20.0 / 24));
  CHECK(part.mean_m3s.value() == Approx(4).epsilon(1e-14));
  CHECK(has(part.flags, Flag::gap));
  CHECK(part.quality == Quality::estimate);
  CHECK(part.agrees());
  store::Settings strict = with_gap(1440);
  strict.least_share_of_day = 0.9;
  small.set(strict);
  const auto none = trace(small.book, "2020-01-03T00:00Z");
  CHECK(!none.mean_m3s);
  CHECK(!none.recomputed_m3s);
  CHECK(none.pieces.size() == 1);
  CHECK(none.quality == Quality::missing);
  CHECK(none.agrees());
  const auto empty = trace(small.book, "2020-02-03T00:00Z");
  CHECK(empty.pieces.empty());
  CHECK(empty.share == 0);
  CHECK(empty.agrees());
}

TEST_CASE("a published day is traced as it was made") {
  auto small = with_step();
  const auto replay = small.keep("2020-01-01T00:00Z", "2020-01-04T00:00Z");
  const int number = small.publish(replay);
  const auto published = small.book.newest_act();
  add_edition(small.book, {period(3, "2020-01-01T00:00Z", "")});
  store::Settings other;
  other.published_decimals = 0;
  other.least_share_of_day = 0.99;
  small.set(other);
  const auto traced = trace(small.book, "2020-01-03T12:00Z");
  CHECK(traced.publication == number);
  CHECK(traced.publication_act == published);
  CHECK(traced.replay == replay.number);
  CHECK(traced.published_units == 4000);
  CHECK(traced.recomputed_units == 4000);
  CHECK(traced.quality == Quality::estimate);
  CHECK(traced.agrees());
  CHECK(traced.acts.back().number == published);
  auto tampered = traced;
  tampered.published_units = 4001;
  CHECK(!tampered.agrees());
  tampered = traced;
  tampered.recomputed_m3s = std::nextafter(*traced.recomputed_m3s, 0);
  CHECK(!tampered.agrees());
}

TEST_CASE("every kind of instant and every day computes again to the bit") {
  const auto made = definitions::make_case();
  TemporaryPath path("trace-case");
  const auto book = definitions::book_of(made, path.text());

  SECTION("at readings and between them, against the definitions") {
    std::vector<std::int64_t> times;
    std::mt19937_64 engine(11);
    const std::int64_t begin = to_ms(at("2019-10-29T00:00Z")), end = to_ms(at("2020-03-21T00:00Z"));
    for (int i = 0; i < 150; ++i) {
      times.push_back(begin + static_cast<std::int64_t>(engine() % static_cast<std::uint64_t>(end - begin)));
      times.push_back(to_ms(made.readings[engine() % made.readings.size()].time));
    }
    for (const Period& now : made.periods) {
      for (const std::int64_t beside : {-1, 0, 1}) times.push_back(to_ms(now.from) + beside);
      times.push_back(to_ms(now.from + now.blend / 3));
      times.push_back(to_ms(now.from + now.blend));
    }
    std::sort(times.begin(), times.end());
    definitions::Between between(made);
    int flows = 0;
    for (const std::int64_t time : times) {
      const auto traced = publish::trace_value(book, {kStation, from_ms(time), {}, {}, {}});
      CAPTURE(time, traced.no_flow_because);
      REQUIRE(traced.agrees());
      REQUIRE(traced.discharge_m3s.has_value() == traced.no_flow_because.empty());
      if (traced.readings.size() != 2) continue;  // at readings replay's own tests hold the definitions
      const auto& span = between.around(time);
      REQUIRE(traced.discharge_m3s.has_value() == (span.first && span.last));
      if (!traced.discharge_m3s) continue;
      ++flows;
      const double x = double(time - span.begin) / double(span.end - span.begin);
      const double expected = span.first->q + (span.last->q - span.first->q) * x;
      REQUIRE(definitions::close(*traced.recomputed_m3s, expected, 1e-11));
      double weighed = 0;  // each end of the stretch by its curves
      for (const auto& curve : traced.curves) weighed += curve.weight * curve.discharge_m3s;
      REQUIRE(definitions::close(weighed, span.first->q + span.last->q, 1e-11));
    }
    CHECK(flows > 100);
  }

  SECTION("days") {
    int means = 0;
    for (int day = 0; day < 145; day += 2) {
      const Instant time = at("2019-10-29T12:00Z") + std::chrono::hours(24 * day);
      const auto traced = publish::trace_day(book, {kStation, time, {}, {}, {}});
      CAPTURE(format_day(traced.day));
      REQUIRE(traced.agrees());
      if (!traced.mean_m3s) continue;
      ++means;
      std::int64_t covered = 0;
      for (const auto& piece : traced.pieces) {
        REQUIRE(piece.from < piece.until);
        covered += (piece.until - piece.from).count();
      }
      REQUIRE(double(covered) / definitions::kDayMs == traced.share);
      REQUIRE(!traced.curves.empty());
    }
    CHECK(means > 50);
  }
}
