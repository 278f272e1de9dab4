// Acts, settings, files: beginning and ending an act, and what is known of earlier ones.

#include <sqlite3.h>

#include <algorithm>
#include <cassert>

#include "store/book_impl.hpp"
#include "store/canonical.hpp"
#include "store/outside.hpp"
#include "store/sql.hpp"
#include "terms/finding.hpp"

namespace scourbook::store {
namespace {

using Kind = StoreError::Kind;

constexpr Millis kClockBehind = std::chrono::minutes(5);

constexpr const char* kActColumns =
    "number, time_ms, who, station, reason, command, program, method, tables, hash";

Act act_in(Query& query) {
  Columns c(query);
  Act act;
  act.number = c.integer();
  act.time = from_ms(c.integer());
  act.who = c.text();
  act.station = c.text();
  act.reason = c.text();
  act.command = c.text();
  act.program = c.text();
  act.method = c.small();
  try {
    act.tables = parse_tables(c.text());
  } catch (const StoreError& error) {
    throw StoreError(error.kind(), "act " + std::to_string(act.number) + ": " + error.what());
  }
  act.hash = c.text();
  return act;
}

struct Last {
  std::int64_t number = 0;
  std::int64_t time_ms = INT64_MIN;
  std::string hash = first_hash();
};

Last last_act(const SQLite::Database& db) {
  Query query(db, "SELECT number, time_ms, hash FROM act ORDER BY number DESC LIMIT 1");
  if (!query.next()) return {};
  return {query.integer(0), query.integer(1), query.text(2)};
}

/// The later of the clock and the act before + 1 ms.
Instant time_after(const Last& last) {
  const Instant clock = now();
  if (last.number == 0) return clock;
  const Instant before = from_ms(last.time_ms);
  if (clock < before - kClockBehind) {
    throw StoreError(Kind::refused, "the clock says " + format_time(clock, {}) +
                                        ", but the last act of the book is of " + format_time(before, {}) +
                                        "; set the clock right, else the order of acts cannot be trusted");
  }
  return std::max(clock, before + Millis(1));
}

void require_text(const std::string& text, const char* what) {
  if (!is_utf8(text)) throw StoreError(Kind::refused, std::string(what) + " is not UTF-8");
}

FileRecord file_in(Query& query) {
  Columns c(query);
  FileRecord file;
  file.id = c.integer();
  file.act = c.integer();
  file.name = c.text();
  file.bytes = c.integer();
  file.sha256 = c.text();
  file.kind = c.text();
  return file;
}

struct SettingField {
  const char* name;
  double (*get)(const Settings&);
  void (*set)(Settings&, double);
};

template <auto Member>
constexpr SettingField field(const char* name) {
  return {name, [](const Settings& s) { return static_cast<double>(s.*Member); },
          [](Settings& s, double value) {
            s.*Member = static_cast<std::remove_reference_t<decltype(s.*Member)>>(value);
          }};
}

const SettingField kSettings[] = {field<&Settings::longest_gap_minutes>("longest_gap_minutes"),
                                  field<&Settings::published_digits>("published_digits"),
                                  field<&Settings::published_decimals>("published_decimals"),
                                  field<&Settings::least_share_of_day>("least_share_of_day"),
                                  field<&Settings::estimate_above_gauged>("estimate_above_gauged"),
                                  field<&Settings::poor_above_lineage>("poor_above_lineage")};

/// COMMIT; a row that points nowhere is named.
void end_transaction(SQLite::Database& db) {
  try {
    db.exec("COMMIT");
  } catch (const SQLite::Exception& error) {
    if (error.getExtendedErrorCode() != SQLITE_CONSTRAINT_FOREIGNKEY) throw;
    Query broken(db, "PRAGMA foreign_key_check");
    std::string what = "a row";
    if (broken.next()) what = "a row of " + broken.text(0) + " names a row of " + broken.text(2);
    throw StoreError(Kind::refused, what + " that the book does not hold; nothing was stored");
  }
}

}  // namespace

void require_head(const ActHead& head) {
  if (head.who.find_first_not_of(' ') == std::string::npos) {
    throw StoreError(Kind::refused, "an act needs the name of who does it");
  }
  require_text(head.who, "the name of who does it");
  require_text(head.station, "the station");
  require_text(head.reason, "the reason");
  require_text(head.command, "the command");
}

// ---- reading ----------------------------------------------------------------------------------------------

std::int64_t Book::newest_act() const {
  return guarded([&] { return last_act(impl_->db).number; });
}

Known Book::known_at(Instant time) const {
  return guarded([&] {
    Query query(impl_->db, "SELECT coalesce(max(number), 0) FROM act WHERE time_ms <= ?");
    query.put(to_ms(time));
    (void)query.next();
    return Known{query.integer(0)};
  });
}

std::vector<Act> Book::acts(std::int64_t from, std::int64_t to) const {
  return guarded([&] {
    Query query(impl_->db, std::string("SELECT ") + kActColumns +
                               " FROM act WHERE number BETWEEN ? AND ? ORDER BY number");
    query.put(from, to);
    std::vector<Act> all;
    while (query.next()) all.push_back(act_in(query));
    return all;
  });
}

Act Book::act(std::int64_t number) const {
  auto found = acts(number, number);
  if (found.empty()) {
    throw StoreError(Kind::refused, "the book has no act " + std::to_string(number) + "; its newest is " +
                                        std::to_string(newest_act()));
  }
  return found.front();
}

Settings Book::settings(Known known) const {
  return guarded([&] {
    Settings settings;
    for (const SettingField& field : kSettings) {
      Query query(impl_->db,
                  "SELECT value FROM setting WHERE name = ? AND act <= ? ORDER BY act DESC LIMIT 1");
      query.put(field.name, known.act);
      if (query.next()) field.set(settings, query.real(0));
    }
    return settings;
  });
}

std::optional<FileRecord> Book::file(std::int64_t id) const {
  return guarded([&]() -> std::optional<FileRecord> {
    Query query(impl_->db, "SELECT id, act, name, bytes, sha256, kind FROM file WHERE id = ?");
    query.put(id);
    if (!query.next()) return {};
    return file_in(query);
  });
}

std::vector<FileRecord> Book::files(Known known) const {
  return guarded([&] {
    Query query(impl_->db, "SELECT id, act, name, bytes, sha256, kind FROM file WHERE act <= ? ORDER BY id");
    query.put(known.act);
    std::vector<FileRecord> all;
    while (query.next()) all.push_back(file_in(query));
    return all;
  });
}

// ---- writing ----------------------------------------------------------------------------------------------

Writer Book::begin(const ActHead& head) {
  require_head(head);
  if (!impl_->writable) throw StoreError(Kind::refused, "the book was opened for reading only");
  assert(!impl_->in_act);
  return guarded([&] {
    impl_->db.exec("BEGIN IMMEDIATE");
    try {
      const Last last = last_act(impl_->db);
      return Writer(std::make_unique<Writer::Impl>(*impl_, head, last.number + 1, time_after(last)));
    } catch (...) {
      impl_->db.exec("ROLLBACK");
      throw;
    }
  });
}

Writer::Writer(std::unique_ptr<Impl> impl) : impl_(std::move(impl)) {}
Writer::Writer(Writer&&) noexcept = default;
Writer::~Writer() = default;

Writer::Impl::~Impl() {
  if (!open) return;
  (void)book.db.tryExec("ROLLBACK");
  book.in_act = false;
}

std::int64_t Writer::act() const {
  return impl_->number;
}

std::int64_t Writer::add_file(const std::string& name, std::int64_t bytes, const std::string& sha256,
                              const std::string& kind) {
  return guarded([&] {
    Query id(impl_->db(), "SELECT coalesce(max(id), 0) + 1 FROM file");
    (void)id.next();
    Query insert(impl_->db(),
                 "INSERT INTO file (id, act, name, bytes, sha256, kind) VALUES (?, ?, ?, ?, ?, ?)");
    insert.put(id.integer(0), impl_->number, name, bytes, sha256, kind).run();
    return id.integer(0);
  });
}

void Writer::add_settings(const Settings& settings) {
  guarded([&] {
    for (const SettingField& field : kSettings) {
      Query insert(impl_->db(), "INSERT INTO setting (name, act, value) VALUES (?, ?, ?)");
      insert.put(field.name, impl_->number, field.get(settings)).run();
    }
  });
}

Act Writer::commit() {
  return guarded([&] {
    SQLite::Database& db = impl_->db();
    const ActHead& head = impl_->head;
    Act act;
    act.number = impl_->number;
    act.time = impl_->time;
    act.who = head.who;
    act.station = head.station;
    act.reason = head.reason;
    act.command = head.command;
    act.program = program_version();
    act.method = kMethodVersion;
    for (const TableShape& table : tables_of(db)) {
      ActTable written = digest_of(db, table, act.number);
      if (written.rows > 0) act.tables.push_back(std::move(written));
    }
    act.hash = chain_hash(last_act(db).hash, act);
    Query insert(db,
                 std::string("INSERT INTO act (") + kActColumns + ") VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)");
    insert.put(act.number, to_ms(act.time), act.who, act.station, act.reason, act.command, act.program)
        .put(act.method, tables_json(act.tables), act.hash)
        .run();
    end_transaction(db);
    impl_->open = false;
    impl_->book.in_act = false;
    return act;
  });
}

}  // namespace scourbook::store
