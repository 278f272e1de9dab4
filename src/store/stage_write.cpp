// Appending stage: what repeats, what contradicts, and pieces of what is new.

#include <algorithm>
#include <cassert>
#include <map>

#include "store/book_impl.hpp"
#include "store/sql.hpp"
#include "store/stage_rows.hpp"

namespace scourbook::store {
namespace {

using Kind = StoreError::Kind;

/// A month with more pieces than this is merged when it has ended.
constexpr int kMostPieces = 32;

struct HeldReading {
  std::int64_t time_ms = 0;
  std::int64_t ticks = kMissing;
  Quality quality = Quality::unchecked;
};

/// Readings in force of one month, by time.
class HeldMonth {
 public:
  HeldMonth(const SQLite::Database& db, const std::string& station, int month) {
    for (const InForce& held : in_force(db, station, month, INT64_MAX)) {
      const PieceValues& values = held.values;
      for (std::size_t i = 0; i < values.time_ms.size(); ++i) {
        const std::int64_t ticks = ticks_of(values.value[i], held.piece.unit, held.piece.decimals);
        readings_.push_back({values.time_ms[i], ticks, values.quality[i]});
      }
    }
    std::sort(readings_.begin(), readings_.end(),
              [](const HeldReading& a, const HeldReading& b) { return a.time_ms < b.time_ms; });
  }
  [[nodiscard]] bool empty() const { return readings_.empty(); }
  /// Null where there is no reading at that time.
  [[nodiscard]] const HeldReading* at(std::int64_t time_ms) const {
    const auto found = from(time_ms);
    return found == readings_.end() || found->time_ms != time_ms ? nullptr : &*found;
  }
  [[nodiscard]] bool any_between(std::int64_t after, std::int64_t before) const {
    const auto next = from(after + 1);
    return next != readings_.end() && next->time_ms < before;
  }
  [[nodiscard]] std::int64_t count_inside(std::int64_t first, std::int64_t last) const {
    return from(last + 1) - from(first);
  }

 private:
  [[nodiscard]] std::vector<HeldReading>::const_iterator from(std::int64_t time_ms) const {
    return std::lower_bound(readings_.begin(), readings_.end(), time_ms,
                            [](const HeldReading& r, std::int64_t t) { return r.time_ms < t; });
  }
  std::vector<HeldReading> readings_;
};

std::int64_t ticks_given(const StageSeries& series, const StageReading& reading) {
  return ticks_of(reading.value, series.unit, series.decimals);
}

/// A file that states no quality does not contradict the one that is held.
bool contradicts(const StageSeries& series, const StageReading& reading, const HeldReading& held) {
  return ticks_given(series, reading) != held.ticks ||
         (reading.quality != Quality::unchecked && reading.quality != held.quality);
}

void require_rising(const StageSeries& series) {
  for (std::size_t i = 1; i < series.readings.size(); ++i) {
    assert(series.readings[i].time > series.readings[i - 1].time);
  }
}

using Slice = std::pair<std::size_t, std::size_t>;  ///< of the series' readings, the end excluded

/// The readings of each UTC month.
std::map<int, Slice> by_month(const StageSeries& series) {
  std::map<int, Slice> slices;
  for (std::size_t i = 0; i < series.readings.size(); ++i) {
    const int month = utc_month_of(series.readings[i].time).number;
    const auto [slice, fresh] = slices.try_emplace(month, Slice{i, i + 1});
    if (!fresh) slice->second.second = i + 1;
  }
  return slices;
}

PieceReading piece_reading(const StageReading& reading, std::int64_t file) {
  return {to_ms(reading.time), reading.value, reading.quality, file, reading.line};
}

class Appender {
 public:
  Appender(SQLite::Database& db, const StageSeries& series, std::int64_t act, std::int64_t file)
      : db_(db), series_(series), act_(act), file_(file) {}

  StageTaken append() {
    for (const auto& [month, slice] : by_month(series_)) {
      const HeldMonth held(db_, series_.station, month);
      std::vector<PieceReading> run;
      for (std::size_t i = slice.first; i < slice.second; ++i) {
        const StageReading& reading = series_.readings[i];
        if (const HeldReading* same_time = held.at(to_ms(reading.time))) {
          repeat(reading, *same_time);
          continue;
        }
        // A piece decides all that it spans, so it must not reach over a held reading.
        const bool cut = !run.empty() && held.any_between(run.back().time_ms, to_ms(reading.time));
        if (cut) write(month, run);
        run.push_back(piece_reading(reading, file_));
      }
      write(month, run);
    }
    return taken_;
  }

  /// Replaces all that the series spans, months without readings too.
  StageTaken replace() {
    if (series_.readings.empty()) return taken_;
    const auto slices = by_month(series_);
    const std::int64_t first = to_ms(series_.readings.front().time),
                       last = to_ms(series_.readings.back().time);
    for (int month = slices.begin()->first; month <= slices.rbegin()->first; ++month) {
      const auto slice = slices.find(month);
      const std::int64_t from = std::max(first, to_ms(start_of(UtcMonth{month})));
      const std::int64_t until = std::min(last, to_ms(start_of(UtcMonth{month + 1})) - 1);
      replace_month(month, slice == slices.end() ? Slice{0, 0} : slice->second, from, until);
    }
    return taken_;
  }

 private:
  void repeat(const StageReading& reading, const HeldReading& held) {
    if (contradicts(series_, reading, held)) {
      throw StoreError(Kind::refused,
                       "a reading of " + series_.station + " at " + format_time(reading.time, {}) +
                           " contradicts the one that is held; a correction needs --correct --reason");
    }
    ++taken_.repeated;
  }

  void replace_month(int month, Slice slice, std::int64_t from, std::int64_t until) {
    const HeldMonth held(db_, series_.station, month);
    std::vector<PieceReading> readings;
    std::int64_t same = 0;
    for (std::size_t i = slice.first; i < slice.second; ++i) {
      const StageReading& reading = series_.readings[i];
      readings.push_back(piece_reading(reading, file_));
      const HeldReading* before = held.at(to_ms(reading.time));
      const bool equal = before != nullptr && before->ticks == ticks_given(series_, reading) &&
                         before->quality == reading.quality;
      if (equal) ++same;
    }
    const std::int64_t spanned = held.count_inside(from, until);
    const auto given = static_cast<std::int64_t>(readings.size());
    taken_.repeated += same;
    if (same == given && same == spanned) return;  // nothing that is not held
    taken_.added += given - same;
    store(month, readings, from, until);
  }

  void write(int month, std::vector<PieceReading>& run) {
    if (run.empty()) return;
    taken_.added += static_cast<std::int64_t>(run.size());
    store(month, run, run.front().time_ms, run.back().time_ms);
    run.clear();
  }

  void store(int month, const std::vector<PieceReading>& readings, std::int64_t first, std::int64_t last) {
    Piece piece;
    piece.act = act_;
    piece.station = series_.station;
    piece.month = month;
    piece.file = file_;
    piece.span_first_ms = first;
    piece.span_last_ms = last;
    piece.unit = series_.unit;
    piece.decimals = series_.decimals;
    encode(readings, piece);
    insert_piece(db_, piece);
    ++taken_.pieces;
  }

  SQLite::Database& db_;
  const StageSeries& series_;
  std::int64_t act_;
  std::int64_t file_;
  StageTaken taken_;
};

// ---- merging ----

/// Months of a station that have ended and hold too many pieces since they were last merged.
std::vector<int> months_to_merge(const SQLite::Database& db, const std::string& station) {
  Query query(
      db,
      "SELECT p.month FROM stage_piece p WHERE p.station = ?1 AND p.id > coalesce((SELECT max(m.id) FROM "
      "stage_piece m WHERE m.station = ?1 AND m.month = p.month AND m.merged = 1), 0) AND p.month < (SELECT "
      "max(month) FROM stage_piece WHERE station = ?1) GROUP BY p.month HAVING count(*) > ?2");
  query.put(station, kMostPieces);
  std::vector<int> months;
  while (query.next()) months.push_back(query.small(0));
  return months;
}

struct MergedReading {
  PieceReading reading;
  StageUnit unit;
  int decimals;
};

/// The readings in force, by time, and all that the pieces of the month span together.
struct Merged {
  std::vector<MergedReading> readings;
  std::int64_t first_ms = INT64_MAX;
  std::int64_t last_ms = INT64_MIN;
};

Merged merged_of(const SQLite::Database& db, const std::string& station, int month) {
  Merged all;
  for (const InForce& held : in_force(db, station, month, INT64_MAX)) {
    all.first_ms = std::min(all.first_ms, held.piece.span_first_ms);
    all.last_ms = std::max(all.last_ms, held.piece.span_last_ms);
    const auto& times = held.values.time_ms;
    for (const PieceReading& reading : readings_of(held.piece)) {
      if (!std::binary_search(times.begin(), times.end(), reading.time_ms)) continue;
      all.readings.push_back({reading, held.piece.unit, held.piece.decimals});
    }
  }
  std::sort(all.readings.begin(), all.readings.end(),
            [](const auto& a, const auto& b) { return a.reading.time_ms < b.reading.time_ms; });
  return all;
}

/// Writes the readings in force as merged pieces of equal content: one, or one a run of the same unit and
/// decimals. Together they span all that the pieces before them spanned, so that those need not be read
/// again.
bool merge_month(SQLite::Database& db, const std::string& station, int month, std::int64_t act) {
  const Merged merged = merged_of(db, station, month);
  const auto& all = merged.readings;
  for (std::size_t from = 0; from < all.size();) {
    std::size_t until = from;
    std::vector<PieceReading> readings;
    while (until < all.size() && all[until].unit == all[from].unit &&
           all[until].decimals == all[from].decimals) {
      readings.push_back(all[until++].reading);
    }
    Piece piece;
    piece.act = act;
    piece.station = station;
    piece.month = month;
    piece.merged = true;
    piece.file = readings.front().file;
    piece.span_first_ms = from == 0 ? merged.first_ms : readings.front().time_ms;
    piece.span_last_ms = until < all.size() ? all[until].reading.time_ms - 1 : merged.last_ms;
    piece.unit = all[from].unit;
    piece.decimals = all[from].decimals;
    encode(readings, piece);
    insert_piece(db, piece);
    from = until;
  }
  return !all.empty();
}

}  // namespace

std::vector<StageOverlap> Writer::overlaps(const StageSeries& series, std::size_t most) const {
  return guarded([&] {
    std::vector<StageOverlap> found;
    for (const auto& [month, slice] : by_month(series)) {
      const HeldMonth held(impl_->db(), series.station, month);
      if (held.empty()) continue;
      for (std::size_t i = slice.first; i < slice.second && found.size() < most; ++i) {
        const StageReading& reading = series.readings[i];
        const HeldReading* before = held.at(to_ms(reading.time));
        if (before == nullptr || !contradicts(series, reading, *before)) continue;
        found.push_back({reading.line, reading.time, before->ticks, ticks_given(series, reading),
                         before->quality, reading.quality});
      }
    }
    return found;
  });
}

StageTaken Writer::add_stage(const StageSeries& series, std::int64_t file, bool correct) {
  require_rising(series);
  return guarded([&] {
    Appender appender(impl_->db(), series, impl_->number, file);
    StageTaken taken = correct ? appender.replace() : appender.append();
    if (taken.pieces == 0) return taken;
    for (const int month : months_to_merge(impl_->db(), series.station)) {
      if (merge_month(impl_->db(), series.station, month, impl_->number)) ++taken.merged;
    }
    return taken;
  });
}

}  // namespace scourbook::store
