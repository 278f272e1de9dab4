// Field records as known: the newest version of each, withdrawn ones left out.

#include <algorithm>

#include "store/book_impl.hpp"
#include "store/sql.hpp"

namespace scourbook::store {
namespace {

/// Columns "version, act, withdrawn, file, line" into a stored record.
template <class Record>
Stored<Record> stored_in(Columns& c, Record record) {
  Stored<Record> stored;
  stored.version = c.small();
  stored.act = c.integer();
  stored.withdrawn = c.flag();
  stored.source.file = c.integer();
  stored.source.line = c.integer();
  stored.value = std::move(record);
  return stored;
}

constexpr const char* kVersion = ", t.version, t.act, t.withdrawn, t.file, t.line FROM ";

/// SELECT of the newest known versions that are not withdrawn; `same` joins versions of one key.
/// The first parameter is the act.
std::string newest(const std::string& columns, const std::string& table, const std::string& same,
                   const std::string& where) {
  return "SELECT " + columns + kVersion + table + " t WHERE t.act <= ?1 AND t.withdrawn = 0 AND " + where +
         " AND t.version = (SELECT max(o.version) FROM " + table + " o WHERE " + same + " AND o.act <= ?1)";
}

template <class Record, class Read>
std::vector<Stored<Record>> all_in(Query& query, Read read) {
  std::vector<Stored<Record>> all;
  while (query.next()) {
    Columns c(query);
    Record record = read(c);
    all.push_back(stored_in(c, std::move(record)));
  }
  return all;
}

template <class Record>
std::optional<Stored<Record>> first_of(std::vector<Stored<Record>> all) {
  if (all.empty()) return {};
  return std::move(all.front());
}

// ---- stations ----

constexpr const char* kStation =
    "t.id, t.name, t.river, t.utc_offset_minutes, t.day_start_minutes, t.water_year_month, t.latitude, "
    "t.longitude, t.remark";

Station station_in(Columns& c) {
  Station s;
  s.id = c.text();
  s.name = c.text();
  s.river = c.text();
  s.clock.offset.minutes = std::chrono::minutes(c.integer());
  s.clock.day_start = std::chrono::minutes(c.integer());
  s.clock.water_year_month = c.small();
  s.latitude = c.maybe_real();
  s.longitude = c.maybe_real();
  s.remark = c.text();
  return s;
}

// ---- gauge zero ----

GaugeZeroRow zero_in(Columns& c) {
  GaugeZeroRow row;
  row.station = c.text();
  row.valid_from = from_ms(c.integer());
  row.zero = GaugeZero::from_ticks(c.integer());
  row.remark = c.text();
  return row;
}

// ---- reach ----

constexpr const char* kReach =
    "t.row, t.station, t.valid_from_ms, t.control, t.cross_section, t.part, t.flow_law, t.slope, "
    "t.roughness_n, "
    "t.chezy_c, t.coefficient, t.meander_factor, t.scale_sd_pct, t.level_from_m, t.level_to_m, t.remark";

ReachRow reach_in(Columns& c) {
  ReachRow row;
  row.station = c.text();
  row.valid_from = from_ms(c.integer());
  row.control = known(parse_control(c.text()), "control");
  row.cross_section = c.text();
  row.part = c.text();
  row.law = known(parse_flow_law(c.text()), "flow law");
  row.slope = c.maybe_real();
  row.roughness_n = c.maybe_real();
  row.chezy_c = c.maybe_real();
  row.coefficient = c.maybe_real();
  row.meander_factor = c.real();
  row.scale_sd_pct = c.maybe_real();
  row.level_from_m = c.maybe_real();
  row.level_to_m = c.maybe_real();
  row.remark = c.text();
  return row;
}

std::vector<Book::ReachId> reaches_in(Query& query) {
  std::vector<Book::ReachId> all;
  while (query.next()) {
    Columns c(query);
    Book::ReachId id;
    id.row = c.integer();
    ReachRow row = reach_in(c);
    id.stored = stored_in(c, std::move(row));
    all.push_back(std::move(id));
  }
  return all;
}

// ---- surveys ----

constexpr const char* kSurvey = "t.station, t.id, t.surveyed_at_ms, t.level_uncertainty_m, t.remark";

Survey survey_in(Columns& c) {
  Survey survey;
  survey.station = c.text();
  survey.id = c.text();
  survey.surveyed_at = from_ms(c.integer());
  survey.level_uncertainty_m = c.maybe_real();
  survey.remark = c.text();
  return survey;
}

void add_points(const SQLite::Database& db, std::vector<Stored<Survey>>& surveys) {
  Query query(db,
              "SELECT cross_section, part, distance_m, elevation_m, mark FROM survey_point WHERE station = ? "
              "AND survey "
              "= ? AND version = ? ORDER BY number");
  for (auto& survey : surveys) {
    query.again();
    query.put(survey.value.station, survey.value.id, survey.version);
    while (query.next()) {
      Columns c(query);
      SurveyPoint point;
      point.cross_section = c.text();
      point.part = c.text();
      point.distance_m = c.real();
      point.elevation_m = c.real();
      point.mark = c.text();
      survey.value.points.push_back(std::move(point));
    }
  }
}

std::vector<Stored<Survey>> surveys_in(const SQLite::Database& db, Query& query) {
  auto all = all_in<Survey>(query, survey_in);
  add_points(db, all);
  return all;
}

// ---- gaugings ----

constexpr const char* kGauging =
    "t.station, t.id, t.start_ms, t.end_ms, t.stage_ticks, t.stage_end_ticks, t.discharge_m3s, "
    "t.uncertainty_pct, "
    "t.stage_uncertainty_m, t.method, t.area_m2, t.width_m, t.velocity_ms, t.quality, t.remark";

Gauging gauging_in(Columns& c) {
  Gauging g;
  g.station = c.text();
  g.id = c.text();
  g.start = from_ms(c.integer());
  if (const auto end = c.maybe_integer()) g.end = from_ms(*end);
  g.stage = Stage::from_ticks(c.integer());
  if (const auto end = c.maybe_integer()) g.stage_end = Stage::from_ticks(*end);
  g.discharge = Discharge::from_m3s(c.real());
  g.uncertainty_pct = c.maybe_real();
  g.stage_uncertainty_m = c.maybe_real();
  g.method = c.text();
  g.area_m2 = c.maybe_real();
  g.width_m = c.maybe_real();
  g.velocity_ms = c.maybe_real();
  g.quality = known(parse_quality(c.text()), "quality");
  g.remark = c.text();
  return g;
}

// ---- stage corrections ----

StageCorrection correction_in(Columns& c) {
  StageCorrection correction;
  correction.station = c.text();
  correction.from = from_ms(c.integer());
  correction.until = from_ms(c.integer());
  correction.add_at_from = HeightChange::from_ticks(c.integer());
  correction.add_at_until = HeightChange::from_ticks(c.integer());
  correction.remark = c.text();
  return correction;
}

const char* const kSameId = "o.station = t.station AND o.id = t.id";

}  // namespace

std::vector<Stored<Station>> Book::stations(Known known) const {
  return guarded([&] {
    Query query(impl_->db, newest(kStation, "station", "o.id = t.id", "true") + " ORDER BY t.id");
    query.put(known.act);
    return all_in<Station>(query, station_in);
  });
}

std::optional<Stored<Station>> Book::station(const std::string& id, Known known) const {
  return guarded([&] {
    Query query(impl_->db, newest(kStation, "station", "o.id = t.id", "t.id = ?2"));
    query.put(known.act, id);
    return first_of(all_in<Station>(query, station_in));
  });
}

std::vector<Stored<GaugeZeroRow>> Book::gauge_zeros(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db,
                newest("t.station, t.valid_from_ms, t.zero_ticks, t.remark", "gauge_zero",
                       "o.station = t.station AND o.valid_from_ms = t.valid_from_ms", "t.station = ?2") +
                    " ORDER BY t.valid_from_ms");
    query.put(known.act, station);
    return all_in<GaugeZeroRow>(query, zero_in);
  });
}

std::vector<Book::ReachId> Book::reach_rows(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, newest(kReach, "reach", "o.row = t.row", "t.station = ?2"));
    query.put(known.act, station);
    auto all = reaches_in(query);
    const auto key = [](const ReachId& id) {
      const ReachRow& r = id.stored.value;
      return std::tuple(r.valid_from, static_cast<int>(r.control), r.cross_section, r.part);
    };
    std::sort(all.begin(), all.end(), [&](const ReachId& a, const ReachId& b) { return key(a) < key(b); });
    return all;
  });
}

std::optional<Book::ReachId> Book::reach_row(const std::string& station, std::int64_t row,
                                             int version) const {
  return guarded([&]() -> std::optional<ReachId> {
    Query query(impl_->db, std::string("SELECT ") + kReach + kVersion +
                               "reach t WHERE t.station = ? AND t.row = ? AND t.version = ?");
    query.put(station, row, version);
    auto all = reaches_in(query);
    if (all.empty()) return {};
    return std::move(all.front());
  });
}

std::vector<Stored<Survey>> Book::surveys(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db,
                newest(kSurvey, "survey", kSameId, "t.station = ?2") + " ORDER BY t.surveyed_at_ms, t.id");
    query.put(known.act, station);
    return surveys_in(impl_->db, query);
  });
}

std::optional<Stored<Survey>> Book::survey(const std::string& station, const std::string& id,
                                           Known known) const {
  return guarded([&] {
    Query query(impl_->db, newest(kSurvey, "survey", kSameId, "t.station = ?2 AND t.id = ?3"));
    query.put(known.act, station, id);
    return first_of(surveys_in(impl_->db, query));
  });
}

std::optional<Stored<Survey>> Book::survey_version(const std::string& station, const std::string& id,
                                                   int version) const {
  return guarded([&] {
    Query query(impl_->db, std::string("SELECT ") + kSurvey + kVersion +
                               "survey t WHERE t.station = ? AND t.id = ? AND t.version = ?");
    query.put(station, id, version);
    return first_of(surveys_in(impl_->db, query));
  });
}

std::vector<Stored<Gauging>> Book::gaugings(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, newest(kGauging, "gauging", kSameId, "t.station = ?2") + " ORDER BY t.id");
    query.put(known.act, station);
    auto all = all_in<Gauging>(query, gauging_in);
    std::stable_sort(all.begin(), all.end(),
                     [](const auto& a, const auto& b) { return a.value.middle() < b.value.middle(); });
    return all;
  });
}

std::optional<Stored<Gauging>> Book::gauging(const std::string& station, const std::string& id,
                                             Known known) const {
  return guarded([&] {
    Query query(impl_->db, newest(kGauging, "gauging", kSameId, "t.station = ?2 AND t.id = ?3"));
    query.put(known.act, station, id);
    return first_of(all_in<Gauging>(query, gauging_in));
  });
}

std::optional<Stored<Gauging>> Book::gauging_version(const std::string& station, const std::string& id,
                                                     int version) const {
  return guarded([&] {
    Query query(impl_->db, std::string("SELECT ") + kGauging + kVersion +
                               "gauging t WHERE t.station = ? AND t.id = ? AND t.version = ?");
    query.put(station, id, version);
    return first_of(all_in<Gauging>(query, gauging_in));
  });
}

std::vector<Stored<StageCorrection>> Book::stage_corrections(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(
        impl_->db,
        newest("t.station, t.from_ms, t.until_ms, t.add_at_from_ticks, t.add_at_until_ticks, t.remark",
               "stage_correction",
               "o.station = t.station AND o.from_ms = t.from_ms AND o.until_ms = t.until_ms",
               "t.station = ?2") +
            " ORDER BY t.from_ms, t.act, t.until_ms");
    query.put(known.act, station);
    return all_in<StageCorrection>(query, correction_in);
  });
}

}  // namespace scourbook::store
