// Curves that were derived are derived again, from what they name and as known when they were stored.

#include <catch2/catch.hpp>

#include "history/derivation_input.hpp"
#include "publish/check.hpp"
#include "publish/check_parts.hpp"
#include "rating/evaluate.hpp"
#include "small_book.hpp"
#include "tampering.hpp"

using namespace small_book;
using Catch::Matchers::Contains;

namespace {

Survey trapezoid(const std::string& id, const std::string& time, double bed_m) {
  Survey made;
  made.station = kStation;
  made.id = id;
  made.surveyed_at = at(time);
  made.level_uncertainty_m = 0.02;
  made.points = {{"CS1", "main", 0, 104, ""},
                 {"CS1", "main", 6, bed_m, ""},
                 {"CS1", "main", 16, bed_m, ""},
                 {"CS1", "main", 22, 104, ""}};
  return made;
}

Gauging gauging(const std::string& id, const std::string& time, double stage_m, double m3s) {
  Gauging made;
  made.station = kStation;
  made.id = id;
  made.start = at(time);
  made.stage = Stage::from_metres(stage_m);
  made.discharge = Discharge::from_m3s(m3s);
  made.uncertainty_pct = 6;
  return made;
}

/// A channel of slope 0.001 and n 0.03 over 10 m of bed at 100 m, gauge zero 100 m; the bed 0.3 m higher from
/// 2021 on. Flows of the gaugings are about those of Manning's formula.
struct DerivedBook {
  DerivedBook() : book(store::Book::create(path.text(), head("new"))) {
    auto writer = book.begin(head("records"));
    const auto file = writer.add_file("records.csv", 1, std::string(64, '0'), "station");
    Station station;
    station.id = kStation;
    station.name = "Testing Weir";
    writer.add(station, {file, 1});
    writer.add(zero("2019-01-01T00:00Z", 100), {file, 2});
    ReachRow row;
    row.station = kStation;
    row.valid_from = at("2019-01-01T00:00Z");
    row.cross_section = "CS1";
    row.slope = 0.001;
    row.roughness_n = 0.03;
    writer.add(row, {file, 3});
    writer.add(trapezoid("S1", "2019-12-01T00:00Z", 100), {file, 4}, {4, 5, 6, 7});
    writer.add(trapezoid("S2", "2021-01-01T00:00Z", 100.3), {file, 8}, {8, 9, 10, 11});
    writer.add(gauging("G1", "2020-02-01T00:00Z", 0.5, 3.2), {file, 12});
    writer.add(gauging("G2", "2020-03-01T00:00Z", 1.0, 10.3), {file, 13});
    writer.add(gauging("G3", "2020-04-01T00:00Z", 1.8, 28.5), {file, 14});
    writer.add(gauging("G4", "2021-02-01T00:00Z", 0.8, 3.3), {file, 15});
    writer.add(gauging("G5", "2021-03-01T00:00Z", 1.3, 10.1), {file, 16});
    writer.add(gauging("G6", "2021-04-01T00:00Z", 1.0, 6.0), {file, 17});
    writer.commit();
  }

  RatingCurve derive(history::DerivationRequest request) {
    request.station = kStation;
    const auto collected = history::collect(book, request);
    for (const auto& refusal : collected.refusals) UNSCOPED_INFO(refusal);
    REQUIRE(collected.refusals.empty());
    const auto result = rederivation::derive(collected.input);
    for (const auto& refusal : result.refusals) UNSCOPED_INFO(refusal);
    REQUIRE(result.status == rederivation::Status::ok);
    auto writer = book.begin(head("derive"));
    auto stored = writer.add_curve(result.curve);
    writer.commit();
    return stored;
  }
  RatingCurve derive_first() {
    history::DerivationRequest request;
    request.survey = "S1";
    request.from = at("2020-01-01T00:00Z");
    request.until = at("2021-01-01T00:00Z");
    request.first = true;
    return derive(request);
  }
  RatingCurve derive_second(const rederivation::Options& options = {}) {
    history::DerivationRequest request;
    request.survey = "S2";
    request.from = at("2021-01-01T00:00Z");
    request.descends_from = 1;
    request.options = options;
    return derive(request);
  }
  [[nodiscard]] publish::CheckReport check() const {
    publish::CheckOptions options;
    options.rederive = true;
    auto report = publish::check(book, options);
    for (const auto& damage : report.damage) UNSCOPED_INFO(damage.table + ": " + damage.text);
    return report;
  }

  TemporaryPath path{"derived"};
  store::Book book;
};

}  // namespace

TEST_CASE("derived again, curves give the same flows") {
  DerivedBook derived;
  (void)derived.derive_first();
  rederivation::Options options;
  SECTION("with the policy by default") {}
  SECTION("with a gauging left out by name") {
    options.leave_out = {"G6"};
  }
  SECTION("without gaugings") {
    options.without_gaugings = true;
  }
  SECTION("with coefficients carried") {
    options.hold = HoldPolicy::carried;
  }
  SECTION("with the channel rescaled") {
    options.rescale = true;
  }
  (void)derived.derive_second(options);
  const auto report = derived.check();
  CHECK(report.damage.empty());
  CHECK(report.curves == 2);
  CHECK(report.largest_rederivation_gap == 0);  // on one machine to the bit
}

TEST_CASE("what was corrected since is told, and the curve still derives as known then") {
  DerivedBook derived;
  (void)derived.derive_first();
  (void)derived.derive_second();
  add_edition(derived.book, {period(1, "2020-01-01T00:00Z", "2021-01-01T00:00Z")});
  {
    auto writer = derived.book.begin(head("correction"));
    const auto file = writer.add_file("correction.csv", 1, std::string(64, '0'), "gauging");
    writer.add(gauging("G2", "2020-03-01T00:00Z", 1.0, 15), {file, 2}, true);
    writer.add(gauging("G7", "2020-05-01T00:00Z", 1.0, 10), {file, 3});
    writer.add(gauging("G4", "2021-02-01T00:00Z", 0.8, 4), {file, 4}, true);
    writer.commit();
  }
  const auto report = derived.check();
  CHECK(report.damage.empty());
  CHECK(report.curves == 2);
  CHECK(report.largest_rederivation_gap == 0);
  // Curve 2 is out of date too, but not in force.
  REQUIRE(report.out_of_date.size() == 1);
  CHECK(report.out_of_date[0] ==
        "R-1 curve 1: gauging G2 was corrected: version 2, the curve used version 1");
}

TEST_CASE("a curve that its inputs do not give") {
  DerivedBook derived;
  const auto first = derived.derive_first();
  SECTION("by more than one in a million") {
    tampering::tamper(derived.path.text(), "UPDATE curve_control SET flow_scale = flow_scale * 1.000002");
    const auto report = derived.check();
    CHECK(report.largest_rederivation_gap == Approx(2e-6).epsilon(1e-3));
    REQUIRE(!report.damage.empty());
    CHECK(report.damage.back().table == "curve");
    CHECK(report.damage.back().text == "R-1 curve 1: derived again, ln Q differs by up to 2e-06");
  }
  SECTION("by less: told as a gap; the ledger finds it all the same") {
    tampering::tamper(derived.path.text(), "UPDATE curve_control SET flow_scale = flow_scale * 1.0000005");
    const auto report = derived.check();
    CHECK(report.largest_rederivation_gap == Approx(5e-7).epsilon(1e-3));
    for (const auto& damage : report.damage) CHECK_THAT(damage.text, !Contains("derived again"));
    CHECK(!report.damage.empty());
  }
  SECTION("since a survey point was changed") {
    tampering::tamper(derived.path.text(),
                      "UPDATE survey_point SET elevation_m = elevation_m + 0.1 WHERE survey = 'S1'");
    const auto report = derived.check();
    CHECK(report.largest_rederivation_gap > 0.01);
    CHECK_THAT(report.damage.back().text, Contains("R-1 curve 1: derived again, ln Q differs"));
  }
  SECTION("since its survey is gone") {
    tampering::tamper(derived.path.text(),
                      "PRAGMA foreign_keys = OFF; DELETE FROM survey WHERE id = 'S1'; DELETE FROM "
                      "survey_point WHERE survey = 'S1'");
    const auto report = derived.check();
    CHECK(report.curves == 1);
    CHECK_THAT(report.damage.back().text,
               Contains("R-1 curve 1: it cannot be derived again from what it names: station R-1 has no "
                        "survey S1"));
  }
}

TEST_CASE("the gap between two curves") {
  const auto curve_of = [](double h0_m, double scale) {
    return curve({control(ControlKind::channel, h0_m, 2, scale)});
  };
  const auto base = curve_of(100, 10);  // bands at 99.5, 100.5, 101.5 and 104 m
  CHECK(publish::largest_gap(base, base) == 0);
  CHECK(publish::largest_gap(base, curve_of(100, 11)) == Approx(std::log(1.1)));
  CHECK(publish::largest_gap(base, curve_of(100.01, 10)) == Approx(2 * std::log(0.5 / 0.49)));
  CHECK(publish::largest_gap(base, curve_of(100.5001, 10)) == 1);  // flow at 100.5 m against none
  CHECK(publish::largest_gap(base, curve_of(99.4999999, 10)) > 0.5);
  CHECK(publish::largest_gap(curve_of(99.5, 10), curve_of(99.5 - 1e-12, 10)) < 1e-10);  // no flow to speak of
}

TEST_CASE("what cannot be computed with") {
  Edition edition;
  CHECK(publish::unfit(edition).empty());
  edition.periods = {period(1, "2020-01-01T00:00Z", "2020-02-01T00:00Z"), period(2, "2020-02-01T00:00Z", "")};
  CHECK(publish::unfit(edition).empty());
  edition.periods[0].until.reset();
  CHECK(publish::unfit(edition) == "its periods overlap");
  edition.periods = {period(1, "2020-01-01T00:00Z", "2020-01-01T00:00Z")};
  CHECK(publish::unfit(edition) == "a period ends before it begins");
  auto made = proportional(1);
  CHECK(publish::unfit(made).empty());
  made.bands.clear();
  CHECK(publish::unfit(made) == "it has no band");
}
