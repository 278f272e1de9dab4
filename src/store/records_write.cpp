// Appending field records: version 1, or the next version of what is held.

#include <algorithm>
#include <cassert>

#include "store/book_impl.hpp"
#include "store/sql.hpp"

namespace scourbook::store {
namespace {

using Kind = StoreError::Kind;

/// The newest version of a key; 0 where there is none.
template <class... Key>
int held(const SQLite::Database& db, const std::string& table, const std::string& where, const Key&... key) {
  Query query(db, "SELECT version FROM " + table + " WHERE " + where + " ORDER BY version DESC LIMIT 1");
  query.put(key...);
  return query.next() ? query.small(0) : 0;
}

/// The version to write. A record that is held, or was withdrawn, needs a correction.
int next_version(int held_version, bool correct, const std::string& what) {
  if (held_version > 0 && !correct) {
    throw StoreError(Kind::refused,
                     what + " is held already; take it in with --correct --reason to write a new version");
  }
  return held_version + 1;
}

/// How a row begins: version, act, withdrawn, file, line.
struct Begin {
  int version;
  std::int64_t act;
  bool withdrawn;
  SourceLine source;
};

void put(Query& query, const Begin& begin) {
  query.put(begin.version, begin.act, begin.withdrawn, begin.source.file, begin.source.line);
}

std::optional<std::int64_t> ms(const std::optional<Instant>& time) {
  return time ? std::optional(to_ms(*time)) : std::nullopt;
}

std::int64_t reach_row_of(const SQLite::Database& db, const ReachRow& r) {
  Query held_row(db,
                 "SELECT row FROM reach WHERE station = ? AND valid_from_ms = ? AND control = ? AND "
                 "cross_section = ? AND "
                 "part = ? LIMIT 1");
  held_row.put(r.station, to_ms(r.valid_from), word(r.control), r.cross_section, r.part);
  if (held_row.next()) return held_row.integer(0);
  Query next(db, "SELECT coalesce(max(row), 0) + 1 FROM reach");
  (void)next.next();
  return next.integer(0);
}

}  // namespace

void Writer::add(const Station& s, SourceLine source, bool correct, bool withdrawn) {
  guarded([&] {
    const int version =
        next_version(held(impl_->db(), "station", "id = ?", s.id), correct, "station " + s.id);
    Query insert(
        impl_->db(),
        "INSERT INTO station (id, version, act, withdrawn, file, line, name, river, utc_offset_minutes, "
        "day_start_minutes, water_year_month, latitude, longitude, remark) "
        "VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(s.id);
    put(insert, {version, impl_->number, withdrawn, source});
    insert.put(s.name, s.river, static_cast<std::int64_t>(s.clock.offset.minutes.count()))
        .put(static_cast<std::int64_t>(s.clock.day_start.count()), s.clock.water_year_month)
        .put(s.latitude, s.longitude, s.remark)
        .run();
  });
}

void Writer::add(const GaugeZeroRow& row, SourceLine source, bool correct, bool withdrawn) {
  guarded([&] {
    const int before = held(impl_->db(), "gauge_zero", "station = ? AND valid_from_ms = ?", row.station,
                            to_ms(row.valid_from));
    const int version = next_version(before, correct, "this gauge zero of " + row.station);
    Query insert(
        impl_->db(),
        "INSERT INTO gauge_zero (station, valid_from_ms, version, act, withdrawn, file, line, zero_ticks, "
        "remark) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(row.station, to_ms(row.valid_from));
    put(insert, {version, impl_->number, withdrawn, source});
    insert.put(row.zero.ticks(), row.remark).run();
  });
}

void Writer::add(const ReachRow& r, SourceLine source, bool correct, bool withdrawn) {
  guarded([&] {
    const std::int64_t row = reach_row_of(impl_->db(), r);
    const int before = held(impl_->db(), "reach", "row = ?", row);
    const int version = next_version(before, correct, "this reach row of " + r.station);
    Query insert(
        impl_->db(),
        "INSERT INTO reach (row, version, act, withdrawn, file, line, station, valid_from_ms, control, "
        "cross_section, part, flow_law, slope, roughness_n, chezy_c, coefficient, meander_factor, "
        "scale_sd_pct, level_from_m, level_to_m, remark) "
        "VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(row);
    put(insert, {version, impl_->number, withdrawn, source});
    insert.put(r.station, to_ms(r.valid_from), word(r.control), r.cross_section, r.part, word(r.law))
        .put(r.slope, r.roughness_n, r.chezy_c, r.coefficient, r.meander_factor, r.scale_sd_pct)
        .put(r.level_from_m, r.level_to_m, r.remark)
        .run();
  });
}

void Writer::add(const Survey& s, SourceLine source, const std::vector<std::int64_t>& point_lines,
                 bool correct, bool withdrawn) {
  assert(point_lines.size() == s.points.size());
  guarded([&] {
    const int before = held(impl_->db(), "survey", "station = ? AND id = ?", s.station, s.id);
    const int version = next_version(before, correct, "survey " + s.id + " of " + s.station);
    Query insert(impl_->db(),
                 "INSERT INTO survey (station, id, version, act, withdrawn, file, line, surveyed_at_ms, "
                 "level_uncertainty_m, remark) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(s.station, s.id);
    put(insert, {version, impl_->number, withdrawn, source});
    insert.put(to_ms(s.surveyed_at), s.level_uncertainty_m, s.remark).run();
    Query point(impl_->db(),
                "INSERT INTO survey_point (station, survey, version, number, act, line, cross_section, part, "
                "distance_m, elevation_m, mark) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    for (std::size_t i = 0; i < s.points.size(); ++i) {
      const SurveyPoint& p = s.points[i];
      point.again();
      point.put(s.station, s.id, version, static_cast<std::int64_t>(i + 1), impl_->number, point_lines[i])
          .put(p.cross_section, p.part, p.distance_m, p.elevation_m, p.mark)
          .run();
    }
  });
}

void Writer::add(const Gauging& g, SourceLine source, bool correct, bool withdrawn) {
  guarded([&] {
    const int before = held(impl_->db(), "gauging", "station = ? AND id = ?", g.station, g.id);
    const int version = next_version(before, correct, "gauging " + g.id + " of " + g.station);
    Query insert(
        impl_->db(),
        "INSERT INTO gauging (station, id, version, act, withdrawn, file, line, start_ms, end_ms, "
        "stage_ticks, stage_end_ticks, discharge_m3s, uncertainty_pct, stage_uncertainty_m, method, area_m2, "
        "width_m, velocity_ms, quality, remark) "
        "VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    const auto stage_end = g.stage_end ? std::optional(g.stage_end->ticks()) : std::nullopt;
    insert.put(g.station, g.id);
    put(insert, {version, impl_->number, withdrawn, source});
    insert.put(to_ms(g.start), ms(g.end), g.stage.ticks(), stage_end, g.discharge.m3s())
        .put(g.uncertainty_pct, g.stage_uncertainty_m, g.method, g.area_m2, g.width_m, g.velocity_ms)
        .put(word(g.quality), g.remark)
        .run();
  });
}

void Writer::add(const StageCorrection& s, SourceLine source, bool correct, bool withdrawn) {
  guarded([&] {
    const int before = held(impl_->db(), "stage_correction", "station = ? AND from_ms = ? AND until_ms = ?",
                            s.station, to_ms(s.from), to_ms(s.until));
    const int version = next_version(before, correct, "this stage correction of " + s.station);
    Query insert(
        impl_->db(),
        "INSERT INTO stage_correction (station, from_ms, until_ms, version, act, withdrawn, file, line, "
        "add_at_from_ticks, add_at_until_ticks, remark) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(s.station, to_ms(s.from), to_ms(s.until));
    put(insert, {version, impl_->number, withdrawn, source});
    insert.put(s.add_at_from.ticks(), s.add_at_until.ticks(), s.remark).run();
  });
}

}  // namespace scourbook::store
