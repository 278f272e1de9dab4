// Curves: every bit comes back, and no figure that is none goes in.

#include <fmt/format.h>
#include <catch2/catch.hpp>

#include <limits>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::StoreError;

namespace {

std::string of(double value) {
  return fmt::format("{:a}", value);
}
std::string of(const std::optional<double>& value) {
  return value ? of(*value) : "none";
}

// The structured bindings name every field: one that is added to the structure does not compile here until it
// is compared, and so stored, too.

std::string of(const ControlCoefficients& control) {
  const auto& [kind, name, cross_section, part, law, v1, b, dh, dc, delta, calibrated_in, survey, version,
               lowest, surveyed_h0, surveyed_c, w, f, from, to, misfit, eh, ec, h0, c, exponent, scale,
               scale_fate, allowance_fate, survey_fate, trim_fate] = control;
  std::string text = fmt::format("{} {} {} {} {} {} {} {}", word(kind), name, cross_section, part, word(law),
                                 calibrated_in, survey, version);
  for (double value : {v1, b, dh, dc, delta, lowest, surveyed_h0, surveyed_c, w, f, from, to, misfit, eh, ec,
                       h0, c, exponent, scale}) {
    text += " " + of(value);
  }
  for (Fate fate : {scale_fate, allowance_fate, survey_fate, trim_fate})
    text += fmt::format(" {}", word(fate));
  return text + "\n";
}

std::string of(const CurveGauging& gauging) {
  const auto& [id, version, use, reason, role, level, discharge, on_curve, residual, sd] = gauging;
  return fmt::format("{} {} {} {} {} {} {} {} {} {}\n", id, version, word(use), reason, role, of(level),
                     of(discharge), of(on_curve), of(residual), of(sd));
}

std::string of(const Diagnostic& diagnostic) {
  const auto& [name, value, limit, verdict, text, rule, source] = diagnostic;
  return fmt::format("{} {} {} {} {} {} {}\n", name, of(value), of(limit), verdict, text, rule, source);
}

std::string of(const RatingCurve& curve) {
  const auto& [number, station, form, hold, lineage, parent, survey, version, reach, from, until, controls,
               takeover, level_error, model_error, unknowns, covariance, bands, gaugings, diagnostics,
               remarks, top, low, high, lineage_high, inferred, carried] = curve;
  std::string text = fmt::format(
      "{} {} {} {} {} {} {} {} {} {} {} {} {} {} {} {} {} {} {}\n", number, station, word(form), word(hold),
      lineage, parent.value_or(0), survey, version, to_ms(from), until ? to_ms(*until) : -1, of(takeover),
      of(level_error), of(model_error), of(top), of(low), of(high), of(lineage_high), inferred, carried);
  for (const auto& pinned : reach) text += fmt::format("reach {} {}\n", pinned.row, pinned.version);
  for (const auto& control : controls) text += of(control);
  for (const auto& unknown : unknowns) text += unknown + "\n";
  for (double value : covariance) text += of(value) + "\n";
  for (const auto& band : bands) text += of(band.level_m) + " " + of(band.sd_ln_q) + "\n";
  for (const auto& gauging : gaugings) text += of(gauging);
  for (const auto& diagnostic : diagnostics) text += of(diagnostic);
  for (const auto& remark : remarks) text += remark + "\n";
  return text;
}

struct Held {
  Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  std::vector<PinnedReach> pinned;
  Held() {
    add_ground(book);
    for (const auto& row : book.reach_rows(kStation)) pinned.push_back({row.row, row.stored.version});
  }
  RatingCurve add(const RatingCurve& made) {
    auto writer = book.begin(head("curve"));
    RatingCurve stored = writer.add_curve(made);
    writer.commit();
    return stored;
  }
  std::string refused(const RatingCurve& made) {
    try {
      add(made);
    } catch (const StoreError& error) {
      CHECK(error.kind() == StoreError::Kind::refused);
      CHECK(book.curves(kStation).empty());
      return error.what();
    }
    return "stored";
  }
};

}  // namespace

TEST_CASE("every field of a curve comes back bit by bit") {
  Held held;
  const RatingCurve stored = held.add(curve(held.pinned));
  CHECK(stored.number == 1);
  CHECK(stored.lineage == 1);
  CHECK(of(*held.book.curve(kStation, 1)) == of(stored));
  CHECK(of(held.book.curves(kStation).at(0)) == of(stored));
  RatingCurve given = curve(held.pinned);
  given.number = given.lineage = 1;
  CHECK(of(stored) == of(given));
}

TEST_CASE("a curve with nothing optional in it comes back as well") {
  Held held;
  RatingCurve bare = curve({});
  bare.until.reset();
  bare.takeover_level_m.reset();
  bare.gauged_low_m3s.reset();
  bare.gauged_high_m3s.reset();
  bare.lineage_high_m3s.reset();
  bare.unknowns.clear();
  bare.covariance.clear();
  bare.gaugings.clear();
  bare.diagnostics.clear();
  bare.remarks.clear();
  bare.inferred = bare.carried = false;
  const RatingCurve stored = held.add(bare);
  CHECK(of(*held.book.curve(kStation, 1)) == of(stored));
}

TEST_CASE("every word of form, policy, fate and use comes back") {
  Held held;
  for (const auto form : {CurveForm::power, CurveForm::conveyance}) {
    for (const auto hold : {HoldPolicy::velocity_scale, HoldPolicy::carried, HoldPolicy::flow_scale}) {
      RatingCurve made = curve(held.pinned);
      made.form = form;
      made.hold = hold;
      const int number = held.add(made).number;
      CHECK(held.book.curve(kStation, number)->form == form);
      CHECK(held.book.curve(kStation, number)->hold == hold);
    }
  }
  RatingCurve made = curve(held.pinned);
  const Fate fates[] = {Fate::held,    Fate::recomputed, Fate::refitted,
                        Fate::carried, Fate::rescaled,   Fate::fresh};
  const GaugingUse uses[] = {GaugingUse::used, GaugingUse::left_out, GaugingUse::weighted_down};
  for (const Fate fate : fates) {
    for (auto& control : made.controls) {
      control.scale_fate = control.allowance_fate = control.survey_fate = control.trim_fate = fate;
    }
    for (const GaugingUse use : uses) {
      made.gaugings[0].use = use;
      const RatingCurve stored = held.add(made);
      CHECK(of(*held.book.curve(kStation, stored.number)) == of(stored));
    }
  }
}

TEST_CASE("numbers rise by station and lineages follow parents") {
  Held held;
  RatingCurve made = curve(held.pinned);
  CHECK(held.add(made).number == 1);
  made.parent = 1;
  CHECK(held.add(made).number == 2);
  made.parent = 2;
  const RatingCurve third = held.add(made);
  CHECK(third.number == 3);
  CHECK(third.lineage == 1);
  made.parent.reset();
  made.lineage = 1;
  CHECK(held.add(made).lineage == 4);
  CHECK(held.book.curve(kStation, 3)->lineage == 1);
  CHECK(held.book.curve_act(kStation, 3) == 5);
  CHECK_THROWS_WITH(held.book.curve_act(kStation, 9), "TAR-1 has no curve 9");
  CHECK_FALSE(held.book.curve(kStation, 9));
}

TEST_CASE("a curve is known from its act on") {
  Held held;
  held.add(curve(held.pinned));
  const std::int64_t first = held.book.newest_act();
  held.add(curve(held.pinned));
  CHECK(held.book.curves(kStation, {first}).size() == 1);
  CHECK(held.book.curves(kStation, {first - 1}).empty());
  CHECK_FALSE(held.book.curve(kStation, 2, {first}));
  CHECK(held.book.curve(kStation, 2));
}

TEST_CASE("a figure of a curve that is none is refused by its name") {
  const double nan = std::numeric_limits<double>::quiet_NaN(), inf = std::numeric_limits<double>::infinity();
  Held held;
  RatingCurve bad = curve(held.pinned);
  bad.controls[1].flow_scale = nan;
  CHECK(held.refused(bad) == "curve_control.flow_scale is nan, which is no figure; nothing was stored");
  bad = curve(held.pinned);
  bad.bands[0].sd_ln_q = inf;
  CHECK(held.refused(bad) == "curve_band.sd_ln_q is inf, which is no figure; nothing was stored");
  bad = curve(held.pinned);
  bad.gaugings[0].residual = nan;
  CHECK(held.refused(bad) == "curve_gauging.residual is nan, which is no figure; nothing was stored");
  bad = curve(held.pinned);
  bad.diagnostics[0].limit = inf;
  CHECK(held.refused(bad) == "curve_diagnostic.value_limit is inf, which is no figure; nothing was stored");
  bad = curve(held.pinned);
  bad.covariance[4] = nan;
  CHECK(held.refused(bad) == "curve.covariance is nan, which is no figure; nothing was stored");
  bad = curve(held.pinned);
  bad.takeover_level_m = -inf;
  CHECK(held.refused(bad) == "curve.takeover_level_m is -inf, which is no figure; nothing was stored");
}

TEST_CASE(
    "a covariance of another size, a parent, reach row, survey or gauging that is not held are refused") {
  Held held;
  RatingCurve bad = curve(held.pinned);
  bad.covariance.pop_back();
  CHECK(held.refused(bad) == "curve.covariance has 8 figures for 3 unknowns; nothing was stored");
  bad = curve(held.pinned);
  bad.parent = 7;
  CHECK(held.refused(bad) == "TAR-1 has no curve 7 to descend from; nothing was stored");
  bad = curve({{1, 2}});
  CHECK(held.refused(bad) ==
        "a row of curve_reach names a row of reach that the book does not hold; nothing was stored");
  bad = curve(held.pinned);
  bad.survey_version = 2;
  CHECK(held.refused(bad) ==
        "a row of curve names a row of survey that the book does not hold; nothing was stored");
  bad = curve(held.pinned);
  bad.gaugings[1].gauging = "G9";
  CHECK(held.refused(bad) ==
        "a row of curve_gauging names a row of gauging that the book does not hold; nothing was stored");
}

TEST_CASE("zero has no sign in a book") {
  Held held;
  RatingCurve made = curve(held.pinned);
  made.controls[0].trim_c = -0.0;
  made.covariance[5] = -0.0;
  held.add(made);
  const auto read = held.book.curve(kStation, 1);
  CHECK_FALSE(std::signbit(read->controls[0].trim_c));
  CHECK_FALSE(std::signbit(read->covariance[5]));
}

TEST_CASE("a plain client reads a curve's coefficients and covariance") {
  Held held;
  held.add(curve(held.pinned));
  auto db = plain::open(held.folder.path());
  CHECK(plain::one(db, "SELECT survey_fate FROM curve_control WHERE curve = 1 AND kind = 'channel'") ==
        "carried");
  CHECK(plain::one(db, "SELECT count(*) FROM curve c, json_each(c.covariance) v") == "9");
  CHECK(plain::one(db, "SELECT v.value FROM curve c, json_each(c.unknowns) v WHERE v.key = 2") ==
        "channel.ec");
}
