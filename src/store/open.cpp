// Opening and creating books: what is no book, what is too new, how the connection is set up.

#include <spdlog/spdlog.h>
#include <sqlite3.h>
#include <sys/statfs.h>

#include <array>
#include <cstdio>
#include <filesystem>
#include <fstream>

#include "store/book_impl.hpp"
#include "store/migrations.hpp"
#include "store/outside.hpp"
#include "store/sql.hpp"

namespace scourbook::store {
namespace {

namespace fs = std::filesystem;
using Kind = StoreError::Kind;

constexpr int kWaitMs = 10'000;

[[noreturn]] void no_book(const std::string& path, const std::string& why) {
  throw StoreError(Kind::not_a_book, path + " is no book: " + why);
}

/// Refuses what cannot be a book before SQLite sees it, so that the message says what it is.
void look_at(const std::string& path) {
  std::error_code fault;
  const auto status = fs::status(path, fault);
  if (!fs::exists(status)) no_book(path, "there is no such file; scourbook new makes a book");
  if (fs::is_directory(status)) no_book(path, "it is a folder");
  std::ifstream in(path, std::ios::binary);
  if (!in) throw StoreError(Kind::io, path + " cannot be read; look at the rights of the file");
  std::array<char, 16> head{};
  in.read(head.data(), head.size());
  if (in.gcount() == 0) no_book(path, "it is empty");
  if (std::string(head.data(), static_cast<std::size_t>(in.gcount())) !=
      std::string("SQLite format 3\0", 16)) {
    no_book(path, "it is a file of another kind");
  }
}

void warn_on_network(const std::string& path) {
  constexpr long kNfs = 0x6969, kSmb = 0x517b, kCifs = 0xff534d42, kSmb2 = 0xfe534d42;
  struct statfs info {};
  if (statfs(path.c_str(), &info) != 0) return;
  const auto type = static_cast<long>(info.f_type) & 0xffffffffL;
  if (type == kNfs || type == kSmb || type == kCifs || type == kSmb2) {
    spdlog::warn(
        "{} lies on a network file system, where locks cannot be relied on; keep books on a local disk",
        path);
  }
}

void set_up(SQLite::Database& db) {
  sqlite3_extended_result_codes(db.getHandle(), 1);
  db.setBusyTimeout(kWaitMs);
  db.exec("PRAGMA foreign_keys = ON");
  db.exec("PRAGMA recursive_triggers = ON");
  db.exec("PRAGMA cache_size = -65536");
  db.exec("PRAGMA temp_store = MEMORY");
}

void require_book(SQLite::Database& db, const std::string& path) {
  if (db.execAndGet("PRAGMA application_id").getInt() != kApplicationId) {
    no_book(path, "it is a database of another program");
  }
  const int schema = db.execAndGet("PRAGMA user_version").getInt();
  if (schema > newest_schema()) {
    throw StoreError(Kind::newer, path + " has schema " + std::to_string(schema) + "; this program (" +
                                      program_version() + ") knows schemas up to " +
                                      std::to_string(newest_schema()) +
                                      ": use the newer program that wrote it");
  }
}

SQLite::Database connect(const std::string& path, int flags) {
  const char* system = file_system_name();
  return SQLite::Database(path, flags, kWaitMs, system == nullptr ? std::string() : std::string(system));
}

/// A book in a folder that cannot be written has no place for the files beside it; without pending writes it
/// can be read as it lies there.
SQLite::Database connect_unchanging(const std::string& path) {
  std::error_code fault;
  const auto pending = fs::file_size(path + "-wal", fault);
  if (!fault && pending > 0) {
    throw StoreError(Kind::io, path + " has writes pending in " + path +
                                   "-wal and its folder cannot be written; copy both to another folder");
  }
  std::string escaped;
  for (char c : fs::absolute(path).string()) {
    if (c == '%' || c == '?' || c == '#') {
      char code[4];
      std::snprintf(code, sizeof code, "%%%02x", static_cast<unsigned char>(c));
      escaped += code;
    } else {
      escaped += c;
    }
  }
  return SQLite::Database("file:" + escaped + "?immutable=1", SQLite::OPEN_READONLY | SQLite::OPEN_URI);
}

SQLite::Database connect_to_read(const std::string& path) {
  try {
    SQLite::Database db = connect(path, SQLite::OPEN_READONLY);
    set_up(db);
    (void)db.execAndGet("SELECT count(*) FROM sqlite_master");
    return db;
  } catch (const SQLite::Exception& error) {
    const int code = error.getErrorCode() & 0xff;
    if (code != SQLITE_CANTOPEN && code != SQLITE_READONLY) throw;
  }
  SQLite::Database db = connect_unchanging(path);
  set_up(db);
  return db;
}

void remove_files(const std::string& path) {
  std::error_code ignored;
  for (const char* ending : {"", "-wal", "-shm", "-journal"}) fs::remove(path + ending, ignored);
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
  look_at(path);
  return guarded([&] {
    SQLite::Database db = connect_to_read(path);
    require_book(db, path);
    const int schema = db.execAndGet("PRAGMA user_version").getInt();
    if (schema < newest_schema()) {
      throw StoreError(Kind::refused, path + " has the older schema " + std::to_string(schema) +
                                          "; any writing command brings it to schema " +
                                          std::to_string(newest_schema()) + "; keep a copy first");
    }
    return Book(std::make_unique<Impl>(path, std::move(db), false));
  });
}

Book Book::open_to_write(const std::string& path) {
  look_at(path);
  warn_on_network(path);
  return guarded([&] {
    SQLite::Database db = connect(path, SQLite::OPEN_READWRITE);
    set_up(db);
    require_book(db, path);
    db.exec("PRAGMA synchronous = FULL");
    migrate(db);
    return Book(std::make_unique<Impl>(path, std::move(db), true));
  });
}

Book Book::create(const std::string& path, const ActHead& head, const Settings& settings) {
  std::error_code fault;
  if (fs::exists(path, fault)) throw StoreError(Kind::refused, path + " exists already; nothing was changed");
  try {
    return guarded([&] {
      SQLite::Database db = connect(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
      set_up(db);
      (void)db.execAndGet("PRAGMA journal_mode = WAL");
      db.exec("PRAGMA synchronous = FULL");
      migrate(db);
      warn_on_network(path);
      Book book(std::make_unique<Impl>(path, std::move(db), true));
      Writer writer = book.begin(head);
      writer.add_settings(settings);
      (void)writer.commit();
      return book;
    });
  } catch (...) {
    remove_files(path);
    throw;
  }
}

}  // namespace scourbook::store
