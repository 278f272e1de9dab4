// Readings in force, as known.

#include <algorithm>
#include <numeric>

#include "store/book_impl.hpp"
#include "store/sql.hpp"
#include "store/stage_rows.hpp"

namespace scourbook::store {
namespace {

void append(StageBlock& block, const InForce& held) {
  if (held.values.time_ms.empty()) return;
  const auto index = static_cast<std::int32_t>(block.pieces.size());
  block.pieces.push_back(held.piece.id);
  const PieceValues& values = held.values;
  block.time_ms.insert(block.time_ms.end(), values.time_ms.begin(), values.time_ms.end());
  block.quality.insert(block.quality.end(), values.quality.begin(), values.quality.end());
  block.piece.insert(block.piece.end(), values.time_ms.size(), index);
  for (const std::int64_t value : values.value) {
    block.ticks.push_back(ticks_of(value, held.piece.unit, held.piece.decimals));
  }
}

template <class Item>
std::vector<Item> in_order(const std::vector<Item>& items, const std::vector<std::size_t>& order) {
  std::vector<Item> sorted;
  sorted.reserve(items.size());
  for (std::size_t i : order) sorted.push_back(items[i]);
  return sorted;
}

void sort_by_time(StageBlock& block) {
  if (std::is_sorted(block.time_ms.begin(), block.time_ms.end())) return;
  std::vector<std::size_t> order(block.time_ms.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::sort(order.begin(), order.end(), [&](auto a, auto b) { return block.time_ms[a] < block.time_ms[b]; });
  block.time_ms = in_order(block.time_ms, order);
  block.ticks = in_order(block.ticks, order);
  block.quality = in_order(block.quality, order);
  block.piece = in_order(block.piece, order);
}

/// "1.234" out of 1234 and 3 decimals.
std::string recorded_text(std::int64_t value, int decimals) {
  if (value == kMissing) return "missing";
  std::string digits = std::to_string(value < 0 ? -value : value);
  const auto places = static_cast<std::size_t>(decimals);
  if (digits.size() <= places) digits.insert(0, places + 1 - digits.size(), '0');
  if (places > 0) digits.insert(digits.size() - places, ".");
  return (value < 0 ? "-" : "") + digits;
}

std::optional<ReadingOrigin> origin_in(const Piece& piece, Instant time) {
  const auto readings = readings_of(piece);
  const auto at = std::lower_bound(readings.begin(), readings.end(), to_ms(time),
                                   [](const PieceReading& r, std::int64_t t) { return r.time_ms < t; });
  if (at == readings.end() || at->time_ms != to_ms(time)) return {};
  ReadingOrigin origin;
  origin.piece = piece.id;
  origin.file = at->file;
  origin.line = at->line;
  origin.recorded = recorded_text(at->value, piece.decimals);
  origin.unit = piece.unit;
  origin.quality = at->quality;
  return origin;
}

}  // namespace

std::vector<UtcMonth> Book::stage_months(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(
        impl_->db,
        "SELECT DISTINCT month FROM stage_piece WHERE station = ? AND act <= ? AND count > 0 ORDER BY month");
    query.put(station, known.act);
    std::vector<UtcMonth> months;
    while (query.next()) months.push_back({query.small(0)});
    return months;
  });
}

StageBlock Book::stage_block(const std::string& station, UtcMonth month, Known known) const {
  return guarded([&] {
    StageBlock block;
    block.month = month;
    for (const InForce& held : in_force(impl_->db, station, month.number, known.act)) append(block, held);
    sort_by_time(block);
    return block;
  });
}

std::optional<std::pair<Instant, Instant>> Book::stage_span(const std::string& station, Known known) const {
  const auto months = stage_months(station, known);
  const auto first = [&]() -> std::optional<std::int64_t> {
    for (const UtcMonth month : months) {
      const StageBlock block = stage_block(station, month, known);
      if (!block.time_ms.empty()) return block.time_ms.front();
    }
    return {};
  }();
  if (!first) return {};
  for (auto month = months.rbegin(); month != months.rend(); ++month) {
    const StageBlock block = stage_block(station, *month, known);
    if (!block.time_ms.empty()) return std::pair(from_ms(*first), from_ms(block.time_ms.back()));
  }
  return {};
}

std::optional<ReadingOrigin> Book::reading_origin(const std::string& station, Instant time,
                                                  Known known) const {
  return guarded([&]() -> std::optional<ReadingOrigin> {
    const auto piece = piece_at(impl_->db, station, time, known.act);
    if (!piece) return {};
    auto origin = origin_in(*piece, time);
    if (!origin) return {};
    // A merged piece is of a later act than the readings in it.
    const auto from = file(origin->file);
    origin->act = from ? from->act : piece->act;
    return origin;
  });
}

std::int64_t Book::data_version(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db,
                "SELECT max((SELECT coalesce(max(act), 0) FROM stage_piece WHERE station = ?1 AND act <= ?2 "
                "AND merged = 0),"
                " (SELECT coalesce(max(act), 0) FROM stage_correction WHERE station = ?1 AND act <= ?2),"
                " (SELECT coalesce(max(act), 0) FROM gauge_zero WHERE station = ?1 AND act <= ?2))");
    query.put(station, known.act);
    (void)query.next();
    return query.integer(0);
  });
}

}  // namespace scourbook::store
