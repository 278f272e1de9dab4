// Opening and creating books: how the connection is set up, what is too old or too new.

#include <spdlog/spdlog.h>
#include <sqlite3.h>

#include <filesystem>

#include "store/book_impl.hpp"
#include "store/migrations.hpp"
#include "store/outside.hpp"
#include "store/place.hpp"
#include "store/sql.hpp"

namespace scourbook::store {
namespace {

namespace fs = std::filesystem;
using Kind = StoreError::Kind;

/// Like guarded(), and the message begins with the path.
template <class Work>
auto guarded_at(const std::string& path, Work work) -> decltype(work()) {
  try {
    return work();
  } catch (const SQLite::Exception& error) {
    const StoreError said = translated(error);
    throw StoreError(said.kind(), path + ": " + said.what());
  }
}

void set_up(SQLite::Database& db) {
  sqlite3_extended_result_codes(db.getHandle(), 1);
  db.setBusyTimeout(static_cast<int>(wait_for_lock().count()));
  db.exec("PRAGMA foreign_keys = ON");
  db.exec("PRAGMA recursive_triggers = ON");
  db.exec("PRAGMA cache_size = -65536");
  db.exec("PRAGMA temp_store = MEMORY");
}

void set_up_to_write(SQLite::Database& db) {
  set_up(db);
  (void)db.execAndGet("PRAGMA journal_mode = WAL");
  db.exec("PRAGMA synchronous = FULL");
}

int schema_of(SQLite::Database& db) {
  return db.execAndGet("PRAGMA user_version").getInt();
}

void require_book(SQLite::Database& db, const std::string& path) {
  const auto no_book = [&](const char* why) {
    throw StoreError(Kind::not_a_book, path + " is no book: " + why);
  };
  if (db.execAndGet("SELECT count(*) FROM sqlite_master").getInt() == 0) {
    no_book("it is an empty database; if making a book was cut off, remove it and make the book again");
  }
  if (db.execAndGet("PRAGMA application_id").getInt() != kApplicationId) {
    no_book("it is a database of another program");
  }
  if (schema_of(db) > newest_schema()) {
    throw StoreError(Kind::newer, path + " has schema " + std::to_string(schema_of(db)) + "; this program (" +
                                      program_version() + ") knows schemas up to " +
                                      std::to_string(newest_schema()) +
                                      ": use the newer program that wrote it");
  }
}

SQLite::Database connect(const std::string& path, int flags) {
  const char* system = file_system_name();
  return SQLite::Database(path, flags, static_cast<int>(wait_for_lock().count()),
                          system == nullptr ? std::string() : std::string(system));
}

/// A book in a folder that cannot be written has no place for the files beside it; without pending writes it
/// can be read as it lies there, without locks.
SQLite::Database connect_unchanging(const std::string& path) {
  for (const char* ending : {"-wal", "-journal"}) {
    std::error_code fault;
    const auto pending = fs::file_size(path + ending, fault);
    if (fault || pending == 0) continue;
    throw StoreError(Kind::io, path + " has writes pending in " + path + ending +
                                   " and its folder cannot be written; copy both to another folder");
  }
  spdlog::warn("the folder of {} cannot be written: it is read without locks, so nobody may write to it now",
               path);
  return SQLite::Database(unchanging_uri(path), SQLite::OPEN_READONLY | SQLite::OPEN_URI);
}

/// A write that was cut off while the book was not in write-ahead logging is taken back; SQLite does so for
/// those only who may write.
void take_back(const std::string& path) {
  SQLite::Database db = connect(path, SQLite::OPEN_READWRITE);
  (void)db.execAndGet("SELECT count(*) FROM sqlite_master");
}

SQLite::Database connect_and_look(const std::string& path) {
  SQLite::Database db = connect(path, SQLite::OPEN_READONLY);
  set_up(db);
  (void)db.execAndGet("SELECT count(*) FROM sqlite_master");
  return db;
}

SQLite::Database connect_to_read(const std::string& path) {
  try {
    return connect_and_look(path);
  } catch (const SQLite::Exception& error) {
    const int code = error.getExtendedErrorCode();
    if (code == SQLITE_READONLY_ROLLBACK) {
      take_back(path);
      return connect_and_look(path);
    }
    if ((code & 0xff) != SQLITE_CANTOPEN && (code & 0xff) != SQLITE_READONLY) throw;
  }
  SQLite::Database db = connect_unchanging(path);
  set_up(db);
  return db;
}

void require_writable(SQLite::Database& db, const std::string& path) {
  if (sqlite3_db_readonly(db.getHandle(), "main") == 0) return;
  throw StoreError(Kind::io, path + " cannot be written; look at the rights of the file and its folder");
}

/// What stands in the way of a new file, said plainly.
void require_free(const std::string& path) {
  std::error_code fault;
  if (fs::exists(path, fault)) {
    throw StoreError(Kind::refused, path + " exists already; nothing was changed");
  }
  const fs::path folder = fs::absolute(path, fault).parent_path();
  if (!fs::is_directory(folder, fault)) {
    throw StoreError(Kind::io, path + " cannot be made: there is no folder " + folder.string());
  }
}

}  // namespace

std::string program_version() {
  return SCOURBOOK_VERSION;
}

Book::Book(std::unique_ptr<Impl> impl) : impl_(std::move(impl)) {}
Book::Book(Book&&) noexcept = default;
Book& Book::operator=(Book&&) noexcept = default;
Book::~Book() = default;

Book Book::open_to_read(const std::string& path) {
  require_likely_book(path);
  return guarded_at(path, [&] {
    SQLite::Database db = connect_to_read(path);
    require_book(db, path);
    const int schema = schema_of(db);
    if (schema < newest_schema()) {
      throw StoreError(Kind::refused, path + " has the older schema " + std::to_string(schema) +
                                          "; any writing command brings it to schema " +
                                          std::to_string(newest_schema()) + "; keep a copy first");
    }
    return Book(std::make_unique<Impl>(path, std::move(db), false));
  });
}

Book Book::open_to_write(const std::string& path) {
  require_likely_book(path);
  warn_on_network(path);
  return guarded_at(path, [&] {
    SQLite::Database db = connect(path, SQLite::OPEN_READWRITE);
    set_up(db);
    require_book(db, path);
    require_writable(db, path);
    set_up_to_write(db);
    migrate(db);
    return Book(std::make_unique<Impl>(path, std::move(db), true));
  });
}

Book Book::create(const std::string& path, const ActHead& head, const Settings& settings) {
  require_head(head);
  require_free(path);
  try {
    return guarded_at(path, [&] {
      SQLite::Database db = connect(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
      set_up_to_write(db);
      warn_on_network(path);
      auto impl = std::make_unique<Impl>(path, std::move(db), true);
      // Schema and first act in one transaction: a file is a whole book or none.
      impl->db.exec("BEGIN IMMEDIATE");
      lay_schema(impl->db);
      Writer writer(std::make_unique<Writer::Impl>(*impl, head, 1, now()));
      writer.add_settings(settings);
      (void)writer.commit();
      return Book(std::move(impl));
    });
  } catch (...) {
    remove_files(path);
    throw;
  }
}

}  // namespace scourbook::store
