// Editions and replays as stored.

#include "store/book_impl.hpp"
#include "store/sql.hpp"

namespace scourbook::store {
namespace {

using Kind = StoreError::Kind;

std::optional<std::int64_t> ms(const std::optional<Instant>& time) {
  return time ? std::optional(to_ms(*time)) : std::nullopt;
}

std::int64_t next_number(const SQLite::Database& db, const std::string& table, const std::string& station) {
  Query query(db, "SELECT coalesce(max(number), 0) + 1 FROM " + table + " WHERE station = ?");
  query.put(station);
  (void)query.next();
  return query.integer(0);
}

std::vector<Period> periods_of(const SQLite::Database& db, const std::string& station, int edition) {
  Query query(db,
              "SELECT from_ms, until_ms, curve, no_curve, blend_ms FROM period WHERE station = ? AND edition "
              "= ? ORDER "
              "BY number");
  query.put(station, edition);
  std::vector<Period> periods;
  while (query.next()) {
    Period period;
    period.from = from_ms(query.integer(0));
    if (const auto until = query.maybe_integer(1)) period.until = from_ms(*until);
    if (!query.null(2)) {
      period.curve = query.small(2);
    } else {
      const auto reason = parse_no_curve(query.text(3));
      if (!reason) throw StoreError(Kind::damaged, "a period without a curve has no known reason");
      period.none = *reason;
    }
    period.blend = Millis(query.integer(4));
    periods.push_back(period);
  }
  return periods;
}

std::vector<Edition> editions_in(const SQLite::Database& db, Query& query) {
  std::vector<Edition> all;
  while (query.next()) {
    Columns c(query);
    Edition edition;
    edition.station = c.text();
    edition.number = c.small();
    edition.act = c.integer();
    edition.parent = c.maybe_small();
    all.push_back(std::move(edition));
  }
  for (Edition& edition : all) edition.periods = periods_of(db, edition.station, edition.number);
  return all;
}

std::vector<ReplayMonth> months_of(const SQLite::Database& db, const std::string& station, int replay) {
  Query query(
      db, "SELECT month, count, sha256 FROM replay_month WHERE station = ? AND replay = ? ORDER BY month");
  query.put(station, replay);
  std::vector<ReplayMonth> months;
  while (query.next()) months.push_back({UtcMonth{query.small(0)}, query.integer(1), query.text(2)});
  return months;
}

std::vector<ReplayRecord> replays_in(const SQLite::Database& db, Query& query) {
  std::vector<ReplayRecord> all;
  while (query.next()) {
    Columns c(query);
    ReplayRecord replay;
    replay.station = c.text();
    replay.number = c.small();
    replay.act = c.integer();
    replay.edition = c.small();
    replay.data_version = c.integer();
    replay.method = c.small();
    replay.from = from_ms(c.integer());
    replay.until = from_ms(c.integer());
    all.push_back(std::move(replay));
  }
  for (ReplayRecord& replay : all) replay.months = months_of(db, replay.station, replay.number);
  return all;
}

template <class Item>
std::optional<Item> first_of(std::vector<Item> all) {
  if (all.empty()) return {};
  return std::move(all.front());
}

constexpr const char* kEdition = "SELECT station, number, act, parent FROM edition WHERE station = ? ";
constexpr const char* kReplay =
    "SELECT station, number, act, edition, data_version, method, from_ms, until_ms FROM replay WHERE station "
    "= ? ";

/// By rising time, without overlap; only the last may be open.
void require_order(const Edition& edition) {
  for (std::size_t i = 0; i < edition.periods.size(); ++i) {
    const Period& period = edition.periods[i];
    const bool ends = !period.until || *period.until > period.from;
    const bool free =
        i + 1 == edition.periods.size() || (period.until && *period.until <= edition.periods[i + 1].from);
    if (ends && free) continue;
    throw StoreError(Kind::refused, "period " + std::to_string(i + 1) + " of the edition, from " +
                                        format_time(period.from, {}) +
                                        (ends ? ", reaches into the next" : ", ends before it begins") +
                                        "; nothing was stored");
  }
}

}  // namespace

std::vector<Edition> Book::editions(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, std::string(kEdition) + "AND act <= ? ORDER BY number");
    query.put(station, known.act);
    return editions_in(impl_->db, query);
  });
}

std::optional<Edition> Book::edition(const std::string& station, int number) const {
  return guarded([&] {
    Query query(impl_->db, std::string(kEdition) + "AND number = ?");
    query.put(station, number);
    return first_of(editions_in(impl_->db, query));
  });
}

std::optional<Edition> Book::newest_edition(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, std::string(kEdition) + "AND act <= ? ORDER BY number DESC LIMIT 1");
    query.put(station, known.act);
    return first_of(editions_in(impl_->db, query));
  });
}

std::vector<ReplayRecord> Book::replays(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, std::string(kReplay) + "AND act <= ? ORDER BY number");
    query.put(station, known.act);
    return replays_in(impl_->db, query);
  });
}

std::optional<ReplayRecord> Book::replay(const std::string& station, int number) const {
  return guarded([&] {
    Query query(impl_->db, std::string(kReplay) + "AND number = ?");
    query.put(station, number);
    return first_of(replays_in(impl_->db, query));
  });
}

Edition Writer::add_edition(Edition edition) {
  require_order(edition);
  return guarded([&] {
    SQLite::Database& db = impl_->db();
    edition.number = static_cast<int>(next_number(db, "edition", edition.station));
    edition.act = impl_->number;
    Query insert(db, "INSERT INTO edition (station, number, act, parent) VALUES (?, ?, ?, ?)");
    insert.put(edition.station, edition.number, edition.act, edition.parent).run();
    Query row(db,
              "INSERT INTO period (station, edition, number, act, from_ms, until_ms, curve, no_curve, "
              "blend_ms) VALUES "
              "(?, ?, ?, ?, ?, ?, ?, ?, ?)");
    std::int64_t number = 0;
    for (const Period& period : edition.periods) {
      const auto reason = period.curve ? std::nullopt : std::optional(std::string(word(period.none)));
      row.again();
      row.put(edition.station, edition.number, ++number, edition.act, to_ms(period.from), ms(period.until))
          .put(period.curve, reason, static_cast<std::int64_t>(period.blend.count()))
          .run();
    }
    return edition;
  });
}

ReplayRecord Writer::add_replay(ReplayRecord replay) {
  return guarded([&] {
    SQLite::Database& db = impl_->db();
    replay.number = static_cast<int>(next_number(db, "replay", replay.station));
    replay.act = impl_->number;
    Query insert(db,
                 "INSERT INTO replay (station, number, act, edition, data_version, method, from_ms, "
                 "until_ms) VALUES (?, "
                 "?, ?, ?, ?, ?, ?, ?)");
    insert.put(replay.station, replay.number, replay.act, replay.edition, replay.data_version, replay.method)
        .put(to_ms(replay.from), to_ms(replay.until))
        .run();
    Query row(
        db,
        "INSERT INTO replay_month (station, replay, month, act, count, sha256) VALUES (?, ?, ?, ?, ?, ?)");
    for (const ReplayMonth& month : replay.months) {
      row.again();
      row.put(replay.station, replay.number, month.month.number, replay.act, month.values, month.sha256)
          .run();
    }
    return replay;
  });
}

}  // namespace scourbook::store
