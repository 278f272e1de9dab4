#include "store/stage_rows.hpp"

#include <algorithm>
#include <utility>

#include "store/sql.hpp"

namespace scourbook::store {
namespace {

constexpr const char* kColumns =
    "id, act, station, month, merged, file, span_first_ms, span_last_ms, first_ms, step_ms, count, unit, "
    "decimals, "
    "stage_values, quality_runs, line_runs, sha256";

std::string of_month() {
  return std::string("SELECT ") + kColumns +
         " FROM stage_piece WHERE station = ? AND month = ? AND act <= ? ORDER BY id DESC";
}

Piece piece_in(Query& query) {
  Columns c(query);
  Piece p;
  p.id = c.integer();
  p.act = c.integer();
  p.station = c.text();
  p.month = c.small();
  p.merged = c.flag();
  p.file = c.integer();
  p.span_first_ms = c.integer();
  p.span_last_ms = c.integer();
  p.first_ms = c.integer();
  p.step_ms = c.integer();
  p.count = c.integer();
  p.unit = parse_unit(c.text());
  p.decimals = c.small();
  if (p.decimals < 0 || p.decimals > 8 || p.step_ms < 0) {
    throw StoreError(StoreError::Kind::damaged,
                     "stage piece " + std::to_string(p.id) + ": its decimals or step cannot be");
  }
  p.values = c.text();
  p.quality_runs = c.text();
  p.line_runs = c.text();
  p.sha256 = c.text();
  return p;
}

/// Spans that later pieces have taken: disjoint, both ends included.
class Taken {
 public:
  [[nodiscard]] bool touches(std::int64_t first, std::int64_t last) const {
    return std::any_of(spans_.begin(), spans_.end(),
                       [&](const auto& s) { return s.first <= last && first <= s.second; });
  }
  [[nodiscard]] bool holds(std::int64_t t) const {
    return std::any_of(spans_.begin(), spans_.end(),
                       [&](const auto& s) { return s.first <= t && t <= s.second; });
  }
  [[nodiscard]] bool holds_all(std::int64_t first, std::int64_t last) const {
    return std::any_of(spans_.begin(), spans_.end(),
                       [&](const auto& s) { return s.first <= first && last <= s.second; });
  }
  void add(std::int64_t first, std::int64_t last) {
    const auto touches = [&](const auto& s) { return s.first <= last + 1 && first <= s.second + 1; };
    for (auto span = spans_.begin(); span != spans_.end();) {
      if (!touches(*span)) {
        ++span;
        continue;
      }
      first = std::min(first, span->first);
      last = std::max(last, span->second);
      span = spans_.erase(span);
    }
    spans_.emplace_back(first, last);
  }

 private:
  std::vector<std::pair<std::int64_t, std::int64_t>> spans_;
};

PieceValues not_taken(PieceValues values, const Taken& taken) {
  if (values.time_ms.empty() || !taken.touches(values.time_ms.front(), values.time_ms.back())) return values;
  PieceValues kept;
  for (std::size_t i = 0; i < values.time_ms.size(); ++i) {
    if (taken.holds(values.time_ms[i])) continue;
    kept.time_ms.push_back(values.time_ms[i]);
    kept.value.push_back(values.value[i]);
    kept.quality.push_back(values.quality[i]);
  }
  return kept;
}

constexpr int kSpanFirst = 6, kSpanLast = 7;  ///< places in kColumns

}  // namespace

void for_each_piece(const SQLite::Database& db, const std::function<void(const Piece&)>& work) {
  Query query(db, std::string("SELECT ") + kColumns + " FROM stage_piece ORDER BY id");
  while (query.next()) work(piece_in(query));
}

std::optional<Piece> piece_at(const SQLite::Database& db, const std::string& station, Instant time,
                              std::int64_t known) {
  Query query(db, of_month());
  query.put(station, utc_month_of(time).number, known);
  while (query.next()) {
    if (query.integer(kSpanFirst) <= to_ms(time) && to_ms(time) <= query.integer(kSpanLast)) {
      return piece_in(query);
    }
  }
  return {};
}

std::vector<InForce> in_force(const SQLite::Database& db, const std::string& station, int month,
                              std::int64_t known) {
  std::vector<InForce> result;
  Taken taken;
  Query query(db, of_month());
  query.put(station, month, known);
  while (query.next()) {
    // The lists of a piece that decides nothing any more are not even read from the file.
    if (taken.holds_all(query.integer(kSpanFirst), query.integer(kSpanLast))) continue;
    Piece piece = piece_in(query);
    PieceValues values = not_taken(decode(piece), taken);
    taken.add(piece.span_first_ms, piece.span_last_ms);
    result.push_back({std::move(piece), std::move(values)});
  }
  return result;
}

void insert_piece(SQLite::Database& db, Piece& piece) {
  Query id(db, "SELECT coalesce(max(id), 0) + 1 FROM stage_piece");
  (void)id.next();
  piece.id = id.integer(0);
  piece.sha256 = digest_of(piece);
  Query insert(db, std::string("INSERT INTO stage_piece (") + kColumns +
                       ") VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
  insert.put(piece.id, piece.act, piece.station, piece.month, piece.merged, piece.file)
      .put(piece.span_first_ms, piece.span_last_ms, piece.first_ms, piece.step_ms, piece.count)
      .put(word(piece.unit), piece.decimals, piece.values, piece.quality_runs, piece.line_runs, piece.sha256)
      .run();
}

}  // namespace scourbook::store
