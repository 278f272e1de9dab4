// Publications as stored: figures of months as lists, day means as rows.

#include <cassert>
#include <nlohmann/json.hpp>

#include "store/book_impl.hpp"
#include "store/canonical.hpp"
#include "store/publication_rows.hpp"
#include "store/sql.hpp"
#include "store/value_text.hpp"

namespace scourbook::store {
namespace {

/// A publication's head is read without its figures.
constexpr const char* kPublication =
    "SELECT station, number, act, replay, from_ms, until_ms, decimals, title, note, sha256 FROM publication "
    "WHERE "
    "station = ? ";

Publication publication_in(Query& query) {
  Columns c(query);
  Publication p;
  p.station = c.text();
  p.number = c.small();
  p.act = c.integer();
  p.replay = c.small();
  p.from = from_ms(c.integer());
  p.until = from_ms(c.integer());
  p.decimals = c.small();
  p.title = c.text();
  p.note = c.text();
  p.sha256 = c.text();
  return p;
}

template <class Item>
std::vector<std::int64_t> whole(const std::vector<Item>& items) {
  std::vector<std::int64_t> numbers;
  numbers.reserve(items.size());
  for (const Item& item : items) numbers.push_back(static_cast<std::int64_t>(item));
  return numbers;
}

std::vector<std::int64_t> with_gaps(const std::vector<std::optional<std::int64_t>>& items) {
  std::vector<std::int64_t> numbers;
  numbers.reserve(items.size());
  for (const auto& item : items) numbers.push_back(item.value_or(kMissing));
  return numbers;
}

template <class Item>
std::vector<Item> narrowed(const std::vector<std::int64_t>& numbers) {
  std::vector<Item> items;
  items.reserve(numbers.size());
  for (const std::int64_t number : numbers) items.push_back(static_cast<Item>(number));
  return items;
}

void require_equal_lengths(const PublishedMonth& m) {
  for (std::size_t length :
       {m.value.size(), m.u95_tenth_pct.size(), m.flags.size(), m.quality.size(), m.curve.size()}) {
    assert(length == m.time_ms.size());
    (void)length;
  }
}

PublishedMonth month_in(Query& query) {
  Columns c(query);
  PublishedMonth m;
  m.month.number = c.small();
  const std::int64_t count = c.integer(), first_ms = c.integer(), step_ms = c.integer();
  TimedValues timed = parse_values(c.text(), first_ms, step_ms);
  m.time_ms = std::move(timed.time_ms);
  for (const std::int64_t value : timed.value) {
    m.value.push_back(value == kMissing ? std::nullopt : std::optional(value));
  }
  const std::size_t held = m.value.size();
  m.u95_tenth_pct = parse_integers(c.text());
  m.flags = narrowed<Flags>(parse_runs(c.text(), held));
  m.quality = parse_quality_runs(c.text(), held);
  m.curve = narrowed<int>(parse_runs(c.text(), held));
  if (static_cast<std::int64_t>(held) != count || m.u95_tenth_pct.size() != held) {
    throw StoreError(StoreError::Kind::damaged, "a published month holds another number of figures");
  }
  return m;
}

PublishedDay day_in(Query& query) {
  Columns c(query);
  PublishedDay day;
  day.day = c.small();
  day.mean = c.maybe_integer();
  day.u95_tenth_pct = c.maybe_integer();
  day.flags = static_cast<Flags>(c.integer());
  day.quality = known(parse_quality(c.text()), "quality");
  day.share = c.real();
  try {
    day.curves = nlohmann::json::parse(c.text()).get<std::vector<int>>();
  } catch (const nlohmann::json::exception&) {
    throw StoreError(StoreError::Kind::damaged, "the curves of a published day cannot be read");
  }
  return day;
}

constexpr const char* kMonth =
    "month, count, first_ms, step_ms, flow_values, u95_tenth_pct, flag_runs, quality_runs, curve_runs";
constexpr const char* kDay = "day, mean, u95_tenth_pct, flags, quality, share, curves";

void insert_months(const SQLite::Database& db, const Publication& p) {
  Query insert(db, std::string("INSERT INTO publication_month (station, publication, act, ") + kMonth +
                       ") VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
  for (const PublishedMonth& month : p.months) {
    require_equal_lengths(month);
    const ValueText text = values_text(month.time_ms, with_gaps(month.value));
    insert.again();
    insert
        .put(p.station, p.number, p.act, month.month.number, static_cast<std::int64_t>(month.time_ms.size()))
        .put(text.first_ms, text.step_ms, text.json, integers_json(month.u95_tenth_pct))
        .put(runs_json(whole(month.flags)), quality_runs_json(month.quality), runs_json(whole(month.curve)))
        .run();
  }
}

void insert_days(const SQLite::Database& db, const Publication& p) {
  Query insert(db, std::string("INSERT INTO publication_day (station, publication, act, ") + kDay +
                       ") VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
  for (const PublishedDay& day : p.days) {
    insert.again();
    insert.put(p.station, p.number, p.act, day.day, day.mean, day.u95_tenth_pct)
        .put(static_cast<std::int64_t>(day.flags), word(day.quality), day.share,
             nlohmann::json(day.curves).dump())
        .run();
  }
}

}  // namespace

std::string figures_digest(const SQLite::Database& db, const std::string& station, int publication) {
  Sha256 digest;
  const std::pair<const char*, const char*> tables[] = {{"publication_month", "month"},
                                                        {"publication_day", "day"}};
  for (const auto& [table, key] : tables) {
    digest.add(std::string(table) + "\n");
    Query rows(db, std::string("SELECT ") + (table == tables[0].first ? kMonth : kDay) + " FROM " + table +
                       " WHERE station = ? AND publication = ? ORDER BY " + key);
    rows.put(station, publication);
    std::string text;
    while (rows.next()) {
      text.clear();
      append_canonical(rows.statement(), text);
      digest.add(text);
    }
  }
  return digest.hex();
}

std::vector<Publication> Book::publications(const std::string& station, Known known) const {
  return guarded([&] {
    Query query(impl_->db, std::string(kPublication) + "AND act <= ? ORDER BY number");
    query.put(station, known.act);
    std::vector<Publication> all;
    while (query.next()) all.push_back(publication_in(query));
    return all;
  });
}

std::optional<Publication> Book::publication(const std::string& station, int number) const {
  return guarded([&]() -> std::optional<Publication> {
    Query query(impl_->db, std::string(kPublication) + "AND number = ?");
    query.put(station, number);
    if (!query.next()) return {};
    Publication p = publication_in(query);
    Query months(impl_->db,
                 std::string("SELECT ") + kMonth +
                     " FROM publication_month WHERE station = ? AND publication = ? ORDER BY month");
    months.put(station, number);
    while (months.next()) p.months.push_back(month_in(months));
    Query days(impl_->db, std::string("SELECT ") + kDay +
                              " FROM publication_day WHERE station = ? AND publication = ? ORDER BY day");
    days.put(station, number);
    while (days.next()) p.days.push_back(day_in(days));
    return p;
  });
}

Publication Writer::add_publication(Publication p) {
  return guarded([&] {
    SQLite::Database& db = impl_->db();
    Query number(db, "SELECT coalesce(max(number), 0) + 1 FROM publication WHERE station = ?");
    number.put(p.station);
    (void)number.next();
    p.number = number.small(0);
    p.act = impl_->number;
    insert_months(db, p);
    insert_days(db, p);
    p.sha256 = figures_digest(db, p.station, p.number);
    Query insert(db,
                 "INSERT INTO publication (station, number, act, replay, from_ms, until_ms, decimals, title, "
                 "note, sha256) "
                 "VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(p.station, p.number, p.act, p.replay, to_ms(p.from), to_ms(p.until))
        .put(p.decimals, p.title, p.note, p.sha256)
        .run();
    return p;
  });
}

}  // namespace scourbook::store
