// Curves as stored: one row and its lists.

#include <cmath>
#include <nlohmann/json.hpp>

#include "store/book_impl.hpp"
#include "store/sql.hpp"
#include "terms/finding.hpp"

namespace scourbook::store {
namespace {

constexpr const char* kCurve =
    "station, number, form, hold, lineage, parent, survey, survey_version, from_ms, until_ms, "
    "takeover_level_m, "
    "survey_level_error_m, model_error, surveyed_top_m, gauged_low_m3s, gauged_high_m3s, lineage_high_m3s, "
    "inferred, "
    "carried, unknowns, covariance, remarks";

constexpr const char* kControl =
    "kind, name, cross_section, part, flow_law, velocity_scale, velocity_exponent, allowance_h0_m, "
    "allowance_c, "
    "reference_depth_m, calibrated_in, survey, survey_version, lowest_point_m, surveyed_h0_m, surveyed_c, "
    "area_coefficient, section_coefficient, range_from_m, range_to_m, law_misfit, trim_h0_m, trim_c, h0_m, "
    "area_exponent, exponent, flow_scale, scale_fate, allowance_fate, survey_fate, trim_fate";

constexpr const char* kGauging =
    "gauging, version, gauging_use, reason, role, level_m, discharge_m3s, curve_m3s, residual, sd_ln_q";

constexpr const char* kDiagnostic = "name, value, value_limit, verdict, text, rule, source";

template <class Word, std::size_t N>
Word parsed(const std::string& text, const Word (&words)[N]) {
  for (const Word candidate : words) {
    if (text == word(candidate)) return candidate;
  }
  throw StoreError(StoreError::Kind::damaged, "a stored curve holds an unknown word: " + text);
}

CurveForm form_of(const std::string& text) {
  return parsed(text, {CurveForm::power, CurveForm::conveyance});
}
HoldPolicy hold_of(const std::string& text) {
  return parsed(text, {HoldPolicy::velocity_scale, HoldPolicy::carried, HoldPolicy::flow_scale});
}
GaugingUse use_of(const std::string& text) {
  return parsed(text, {GaugingUse::used, GaugingUse::left_out, GaugingUse::weighted_down});
}
Fate fate_of(const std::string& text) {
  return parsed(text,
                {Fate::held, Fate::recomputed, Fate::refitted, Fate::carried, Fate::rescaled, Fate::fresh});
}

// ---- reading ----

RatingCurve curve_in(Columns& c) {
  RatingCurve curve;
  curve.station = c.text();
  curve.number = c.small();
  curve.form = form_of(c.text());
  curve.hold = hold_of(c.text());
  curve.lineage = c.small();
  curve.parent = c.maybe_small();
  curve.survey = c.text();
  curve.survey_version = c.small();
  curve.from = from_ms(c.integer());
  if (const auto until = c.maybe_integer()) curve.until = from_ms(*until);
  curve.takeover_level_m = c.maybe_real();
  curve.survey_level_error_m = c.real();
  curve.model_error = c.real();
  curve.surveyed_top_m = c.real();
  curve.gauged_low_m3s = c.maybe_real();
  curve.gauged_high_m3s = c.maybe_real();
  curve.lineage_high_m3s = c.maybe_real();
  curve.inferred = c.flag();
  curve.carried = c.flag();
  try {
    curve.unknowns = nlohmann::json::parse(c.text()).get<std::vector<std::string>>();
    curve.covariance = nlohmann::json::parse(c.text()).get<std::vector<double>>();
    curve.remarks = nlohmann::json::parse(c.text()).get<std::vector<std::string>>();
  } catch (const nlohmann::json::exception& error) {
    throw StoreError(StoreError::Kind::damaged,
                     std::string("a stored curve cannot be read: ") + error.what());
  }
  return curve;
}

ControlCoefficients control_in(Columns& c) {
  ControlCoefficients k;
  k.kind = known(parse_control(c.text()), "control");
  k.name = c.text();
  k.cross_section = c.text();
  k.part = c.text();
  k.law = known(parse_flow_law(c.text()), "flow law");
  for (double* real :
       {&k.velocity_scale, &k.velocity_exponent, &k.allowance_h0_m, &k.allowance_c, &k.reference_depth_m}) {
    *real = c.real();
  }
  k.calibrated_in = c.small();
  k.survey = c.text();
  k.survey_version = c.small();
  for (double* real : {&k.lowest_point_m, &k.surveyed_h0_m, &k.surveyed_c, &k.area_coefficient,
                       &k.section_coefficient, &k.range_from_m, &k.range_to_m, &k.law_misfit, &k.trim_h0_m,
                       &k.trim_c, &k.h0_m, &k.area_exponent, &k.exponent, &k.flow_scale}) {
    *real = c.real();
  }
  for (Fate* fate : {&k.scale_fate, &k.allowance_fate, &k.survey_fate, &k.trim_fate})
    *fate = fate_of(c.text());
  return k;
}

CurveGauging gauging_in(Columns& c) {
  CurveGauging g;
  g.gauging = c.text();
  g.version = c.small();
  g.use = use_of(c.text());
  g.reason = c.text();
  g.role = c.text();
  g.level_m = c.real();
  g.discharge_m3s = c.real();
  g.curve_m3s = c.real();
  g.residual = c.maybe_real();
  g.sd_ln_q = c.real();
  return g;
}

Diagnostic diagnostic_in(Columns& c) {
  Diagnostic d;
  d.name = c.text();
  d.value = c.maybe_real();
  d.limit = c.maybe_real();
  d.verdict = c.text();
  d.text = c.text();
  d.rule = c.text();
  d.source = c.text();
  return d;
}

PinnedReach reach_in(Columns& c) {
  PinnedReach reach;
  reach.row = c.integer();
  reach.version = c.small();
  return reach;
}

BandPoint band_in(Columns& c) {
  BandPoint band;
  band.level_m = c.real();
  band.sd_ln_q = c.real();
  return band;
}

template <class Item>
std::vector<Item> list(const SQLite::Database& db, const RatingCurve& curve, const std::string& table,
                       const std::string& columns, Item (*read)(Columns&)) {
  Query query(db,
              "SELECT " + columns + " FROM " + table + " WHERE station = ? AND curve = ? ORDER BY number");
  query.put(curve.station, curve.number);
  std::vector<Item> items;
  while (query.next()) {
    Columns c(query);
    items.push_back(read(c));
  }
  return items;
}

void add_lists(const SQLite::Database& db, RatingCurve& curve) {
  curve.controls = list(db, curve, "curve_control", kControl, control_in);
  curve.reach = list(db, curve, "curve_reach", "reach, version", reach_in);
  curve.bands = list(db, curve, "curve_band", "level_m, sd_ln_q", band_in);
  curve.gaugings = list(db, curve, "curve_gauging", kGauging, gauging_in);
  curve.diagnostics = list(db, curve, "curve_diagnostic", kDiagnostic, diagnostic_in);
}

std::vector<RatingCurve> curves_in(const SQLite::Database& db, Query& query) {
  std::vector<RatingCurve> all;
  while (query.next()) {
    Columns c(query);
    all.push_back(curve_in(c));
  }
  for (RatingCurve& curve : all) add_lists(db, curve);
  return all;
}

// ---- writing ----

void put(Query& q, const ControlCoefficients& k) {
  q.put(word(k.kind), k.name, k.cross_section, k.part, word(k.law))
      .put(k.velocity_scale, k.velocity_exponent, k.allowance_h0_m, k.allowance_c, k.reference_depth_m)
      .put(k.calibrated_in, k.survey, k.survey_version)
      .put(k.lowest_point_m, k.surveyed_h0_m, k.surveyed_c, k.area_coefficient, k.section_coefficient)
      .put(k.range_from_m, k.range_to_m, k.law_misfit, k.trim_h0_m, k.trim_c)
      .put(k.h0_m, k.area_exponent, k.exponent, k.flow_scale)
      .put(word(k.scale_fate), word(k.allowance_fate), word(k.survey_fate), word(k.trim_fate));
}
void put(Query& q, const PinnedReach& r) {
  q.put(r.row, r.version);
}
void put(Query& q, const BandPoint& b) {
  q.put(b.level_m, b.sd_ln_q);
}
void put(Query& q, const CurveGauging& g) {
  q.put(g.gauging, g.version, word(g.use), g.reason, g.role, g.level_m, g.discharge_m3s)
      .put(g.curve_m3s, g.residual, g.sd_ln_q);
}
void put(Query& q, const Diagnostic& d) {
  q.put(d.name, d.value, d.limit, d.verdict, d.text, d.rule, d.source);
}

std::string places(int count) {
  std::string text = "?";
  for (int i = 1; i < count; ++i) text += ", ?";
  return text;
}

template <class Item>
void insert_list(const SQLite::Database& db, const RatingCurve& curve, std::int64_t act,
                 const std::string& table, const std::string& columns, int count,
                 const std::vector<Item>& items) {
  Query insert(db, "INSERT INTO " + table + " (station, curve, number, act, " + columns + ") VALUES (" +
                       places(count + 4) + ")");
  std::int64_t number = 0;
  for (const Item& item : items) {
    insert.again();
    insert.put(curve.station, curve.number, ++number, act);
    put(insert, item);
    insert.run();
  }
}

[[noreturn]] void refuse(const std::string& why) {
  throw StoreError(StoreError::Kind::refused, why + "; nothing was stored");
}

/// JSON with every double as a text that reads back as the same bits.
std::string covariance_json(const RatingCurve& curve) {
  if (curve.covariance.size() != curve.unknowns.size() * curve.unknowns.size()) {
    refuse("curve.covariance has " + std::to_string(curve.covariance.size()) + " figures for " +
           std::to_string(curve.unknowns.size()) + " unknowns");
  }
  std::vector<double> numbers;
  for (const double number : curve.covariance) {
    if (!std::isfinite(number))
      refuse("curve.covariance is " + std::to_string(number) + ", which is no figure");
    numbers.push_back(number + 0.0);  // zero has no sign in a book
  }
  return nlohmann::json(numbers).dump();
}

/// A list of texts as JSON.
std::string texts_json(const char* what, const std::vector<std::string>& texts) {
  for (const std::string& text : texts) {
    if (!is_utf8(text)) refuse(std::string(what) + " holds a text that is not UTF-8");
  }
  return nlohmann::json(texts).dump();
}

void insert_curve(const SQLite::Database& db, const RatingCurve& c, std::int64_t act) {
  Query insert(db, std::string("INSERT INTO curve (act, ") + kCurve + ") VALUES (" + places(23) + ")");
  insert.put(act, c.station, c.number, word(c.form), word(c.hold), c.lineage, c.parent)
      .put(c.survey, c.survey_version, to_ms(c.from))
      .put(c.until ? std::optional(to_ms(*c.until)) : std::nullopt)
      .put(c.takeover_level_m, c.survey_level_error_m, c.model_error, c.surveyed_top_m)
      .put(c.gauged_low_m3s, c.gauged_high_m3s, c.lineage_high_m3s, c.inferred, c.carried)
      .put(texts_json("curve.unknowns", c.unknowns), covariance_json(c),
           texts_json("curve.remarks", c.remarks))
      .run();
  insert_list(db, c, act, "curve_control", kControl, 31, c.controls);
  insert_list(db, c, act, "curve_reach", "reach, version", 2, c.reach);
  insert_list(db, c, act, "curve_band", "level_m, sd_ln_q", 2, c.bands);
  insert_list(db, c, act, "curve_gauging", kGauging, 10, c.gaugings);
  insert_list(db, c, act, "curve_diagnostic", kDiagnostic, 7, c.diagnostics);
}

/// A first curve begins a lineage; every other one is of its parent's.
int lineage_of(const SQLite::Database& db, const std::string& station, int parent) {
  Query query(db, "SELECT lineage FROM curve WHERE station = ? AND number = ?");
  query.put(station, parent);
  if (!query.next()) refuse(station + " has no curve " + std::to_string(parent) + " to descend from");
  return query.small(0);
}

}  // namespace

std::vector<RatingCurve> Book::curves(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, std::string("SELECT ") + kCurve +
                               " FROM curve WHERE station = ? AND act <= ? ORDER BY number");
    query.put(station, known.act);
    return curves_in(impl_->db, query);
  });
}

std::optional<RatingCurve> Book::curve(const std::string& station, int number, Known known) const {
  return guarded([&]() -> std::optional<RatingCurve> {
    Query query(impl_->db, std::string("SELECT ") + kCurve +
                               " FROM curve WHERE station = ? AND number = ? AND act <= ?");
    query.put(station, number, known.act);
    auto all = curves_in(impl_->db, query);
    if (all.empty()) return {};
    return std::move(all.front());
  });
}

std::int64_t Book::curve_act(const std::string& station, int number) const {
  return guarded([&] {
    Query query(impl_->db, "SELECT act FROM curve WHERE station = ? AND number = ?");
    query.put(station, number);
    if (!query.next()) {
      throw StoreError(StoreError::Kind::refused, station + " has no curve " + std::to_string(number));
    }
    return query.integer(0);
  });
}

RatingCurve Writer::add_curve(RatingCurve curve) {
  return guarded([&] {
    const SQLite::Database& db = impl_->db();
    Query number(db, "SELECT coalesce(max(number), 0) + 1 FROM curve WHERE station = ?");
    number.put(curve.station);
    (void)number.next();
    curve.number = number.small(0);
    curve.lineage = curve.parent ? lineage_of(db, curve.station, *curve.parent) : curve.number;
    insert_curve(db, curve, impl_->number);
    return curve;
  });
}

}  // namespace scourbook::store
