// Opening: what is no book, newer, damaged, read-only; two who write; one who reads meanwhile.

#include <catch2/catch.hpp>

#include <sys/wait.h>
#include <unistd.h>

#include <fstream>
#include <functional>

#include "store/full_book.hpp"
#include "store/place.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::StoreError;

namespace {

struct Refusal {
  StoreError::Kind kind{};
  std::string text;
};

Refusal refusal(const std::function<void()>& work) {
  try {
    work();
  } catch (const StoreError& error) {
    return {error.kind(), error.what()};
  }
  FAIL("nothing was refused");
  return {};
}

void write(const std::string& path, const std::string& content) {
  std::ofstream(path, std::ios::binary) << content;
}

std::string content_of(const std::string& path) {
  std::ifstream in(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(in), {}};
}

/// Both ways of opening refuse with the same kind and text.
void check_both(const std::string& path, StoreError::Kind kind, const std::string& text) {
  for (const auto& open : {&Book::open_to_read, &Book::open_to_write}) {
    const Refusal said = refusal([&] { (void)open(path); });
    CHECK(said.kind == kind);
    CHECK(said.text == text);
  }
}

std::int64_t new_book(const std::string& path) {
  Book book = Book::create(path, head("new"));
  fill(book);
  return book.newest_act();
}

/// A short wait for locks, for as long as it lives.
struct ShortWait {
  ShortWait() { store::use_wait(Millis(60)); }
  ~ShortWait() { store::use_wait(std::chrono::seconds(10)); }
};

}  // namespace

TEST_CASE("what is no book is said to be none, and why") {
  const Folder folder;
  const auto not_a_book = StoreError::Kind::not_a_book;
  const std::string path = folder.path("x");
  check_both(path, not_a_book, path + " is no book: there is no such file; scourbook new makes a book");
  CHECK_FALSE(std::filesystem::exists(path));
  std::filesystem::create_directory(path);
  check_both(path, not_a_book, path + " is no book: it is a folder");
  std::filesystem::remove(path);
  write(path, "");
  check_both(path, not_a_book, path + " is no book: it is empty");
  write(path, "station,time,stage_m\n");
  check_both(path, not_a_book, path + " is no book: it is a file of another kind");
  write(path, "SQLite");
  check_both(path, not_a_book, path + " is no book: it is a file of another kind");
  CHECK(content_of(path) == "SQLite");
  check_both("/dev/null", not_a_book, "/dev/null is no book: it is no plain file");
}

TEST_CASE("a database of another program is no book, and stays as it is") {
  const Folder folder;
  const std::string path = folder.path("other");
  {
    SQLite::Database db(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE);
    db.exec("CREATE TABLE act (a); INSERT INTO act VALUES (1); PRAGMA application_id = 7");
  }
  const std::string before = content_of(path);
  check_both(path, StoreError::Kind::not_a_book, path + " is no book: it is a database of another program");
  CHECK(content_of(path) == before);
}

TEST_CASE("a file in which a book was only begun says so") {
  const Folder folder;
  const std::string path = folder.path("begun");
  {
    SQLite::Database(path, SQLite::OPEN_READWRITE | SQLite::OPEN_CREATE)
        .exec("PRAGMA journal_mode = WAL; VACUUM");
  }
  check_both(path, StoreError::Kind::not_a_book,
             path +
                 " is no book: it is an empty database; if making a book was cut off, remove it and make the "
                 "book again");
}

TEST_CASE("a book of a newer program is not touched, and both schemas are named") {
  const Folder folder;
  const std::string path = folder.path();
  new_book(path);
  { plain::open(path).exec("PRAGMA user_version = 99"); }
  const std::string before = content_of(path);
  check_both(path, StoreError::Kind::newer,
             path + " has schema 99; this program (" + store::program_version() +
                 ") knows schemas up to 1: use the newer program that wrote it");
  CHECK(content_of(path) == before);
}

TEST_CASE("half a book is damaged or none, never taken for whole") {
  const Folder folder;
  const std::string path = folder.path(), half = folder.path("half");
  new_book(path);
  const std::string whole = content_of(path);
  for (const std::size_t size :
       {std::size_t(16), std::size_t(50), std::size_t(99), std::size_t(100), std::size_t(512),
        std::size_t(4095), std::size_t(4096), std::size_t(9000), whole.size() / 2, whole.size() - 1}) {
    CAPTURE(size);
    write(half, whole.substr(0, size));
    bool noticed = false;
    try {
      noticed = !Book::open_to_read(half).verify().empty();
    } catch (const StoreError& error) {
      noticed = error.kind() == StoreError::Kind::damaged || error.kind() == StoreError::Kind::not_a_book;
      CAPTURE(error.what());
      CHECK(std::string(error.what()).find(half) != std::string::npos);
    }
    CHECK(noticed);
  }
}

TEST_CASE("an existing file is never made into a book") {
  const Folder folder;
  const std::string path = folder.path();
  write(path, "my notes");
  const Refusal said = refusal([&] { (void)Book::create(path, head("new")); });
  CHECK(said.kind == StoreError::Kind::refused);
  CHECK(said.text == path + " exists already; nothing was changed");
  CHECK(content_of(path) == "my notes");
}

TEST_CASE("a book in a folder that does not exist is refused by name") {
  const Folder folder;
  const std::string path = folder.path("none") + "/b.scourbook";
  const Refusal said = refusal([&] { (void)Book::create(path, head("new")); });
  CHECK(said.kind == StoreError::Kind::io);
  CHECK(said.text == path + " cannot be made: there is no folder " + folder.path("none"));
}

TEST_CASE("a book opened to read takes no act") {
  const Folder folder;
  new_book(folder.path());
  Book book = Book::open_to_read(folder.path());
  const Refusal said = refusal([&] { (void)book.begin(head("write")); });
  CHECK(said.kind == StoreError::Kind::refused);
  CHECK(said.text == "the book was opened for reading only");
}

TEST_CASE("a second writer waits, then is told that the book is busy; nothing of his is stored") {
  const ShortWait wait;
  const Folder folder;
  const std::int64_t acts = new_book(folder.path());
  Book first = Book::open_to_write(folder.path());
  Book second = Book::open_to_write(folder.path());
  {
    auto writer = first.begin(head("first"));
    const Refusal said = refusal([&] { (void)second.begin(head("second")); });
    CHECK(said.kind == StoreError::Kind::busy);
    CHECK(said.text == "another program is writing to the book; try again when it has ended");
    writer.commit();
  }
  CHECK(second.begin(head("second")).commit().number == acts + 2);
  CHECK(first.newest_act() == acts + 2);
  CHECK(first.verify().empty());
}

TEST_CASE("a reader sees what was committed, while an act is being written and after") {
  const Folder folder;
  const std::int64_t acts = new_book(folder.path());
  Book writing = Book::open_to_write(folder.path());
  Book reading = Book::open_to_read(folder.path());
  const UtcMonth month = utc_month_of(at("2021-01-01T00:00Z"));
  {
    auto writer = writing.begin(head("stage"));
    const auto file = writer.add_file("s.csv", 1, std::string(64, '0'), "stage");
    (void)writer.add_stage(series("2021-01-01T00:00Z", 5, 1), file);
    CHECK(reading.newest_act() == acts);
    CHECK(reading.stage_block(kStation, month).time_ms.empty());
    CHECK(reading.verify().empty());
    writer.commit();
  }
  CHECK(reading.newest_act() == acts + 1);
  CHECK(reading.stage_block(kStation, month).time_ms.size() == 5);
}

TEST_CASE("a book that another program took out of write-ahead logging is put back by the next writer") {
  const Folder folder;
  new_book(folder.path());
  { plain::open(folder.path()).exec("PRAGMA journal_mode = DELETE"); }
  CHECK(Book::open_to_read(folder.path()).verify().empty());
  { const Book book = Book::open_to_write(folder.path()); }
  auto db = plain::open(folder.path());
  CHECK(plain::one(db, "PRAGMA journal_mode") == "wal");
}

TEST_CASE("a book moves, with its open act") {
  const Folder folder;
  Book book = Book::create(folder.path(), head("new"));
  auto writer = book.begin(head("moved"));
  auto moved_writer = std::move(writer);
  Book moved = std::move(book);
  CHECK(moved_writer.commit().number == 2);
  CHECK(moved.newest_act() == 2);
}

namespace {

/// Runs `work` as a user without rights to others' files; its result, 0 where all was as expected. For root
/// no folder is read-only.
int as_nobody(const std::function<int()>& work) {
  const pid_t child = fork();
  if (child == 0) {
    if (geteuid() == 0 && (setgid(65534) != 0 || setuid(65534) != 0)) _exit(99);
    int result = 98;
    try {
      result = work();
    } catch (...) {
    }
    _exit(result);
  }
  int status = 0;
  waitpid(child, &status, 0);
  return WIFEXITED(status) ? WEXITSTATUS(status) : 97;
}

namespace fs = std::filesystem;

constexpr auto kReadOnlyFolder = fs::perms::owner_read | fs::perms::owner_exec | fs::perms::group_read |
                                 fs::perms::group_exec | fs::perms::others_read | fs::perms::others_exec;
constexpr auto kReadOnlyFile = fs::perms::owner_read | fs::perms::group_read | fs::perms::others_read;

/// A full book that nobody may write, in a folder that nobody may write.
struct ReadOnly {
  Folder folder;
  std::string path = folder.path();
  ReadOnly() {
    new_book(path);
    fs::permissions(path, kReadOnlyFile);
    fs::permissions(fs::path(path).parent_path(), kReadOnlyFolder);
  }
  ~ReadOnly() { fs::permissions(fs::path(path).parent_path(), fs::perms::owner_all); }
};

}  // namespace

TEST_CASE("a book in a folder that cannot be written is read") {
  const ReadOnly held;
  CHECK(as_nobody([&] {
          const Book book = Book::open_to_read(held.path);
          if (book.newest_act() != 6) return 1;
          if (!book.verify().empty()) return 2;
          return book.stage_months(kStation).size() == 2 ? 0 : 3;
        }) == 0);
}

TEST_CASE("a book whose name looks like an address is read there too") {
  const Folder folder;
  const std::string path = folder.path("50%?mode=x#1 b.scourbook");
  new_book(path);
  fs::permissions(path, kReadOnlyFile);
  fs::permissions(fs::path(path).parent_path(), kReadOnlyFolder);
  CHECK(as_nobody([&] { return Book::open_to_read(path).newest_act() == 6 ? 0 : 1; }) == 0);
  fs::permissions(fs::path(path).parent_path(), fs::perms::owner_all);
}

TEST_CASE("a book that cannot be written is not opened to write, and says what to look at") {
  const ReadOnly held;
  CHECK(as_nobody([&] {
          try {
            (void)Book::open_to_write(held.path);
          } catch (const StoreError& error) {
            if (error.kind() != StoreError::Kind::io) return 1;
            const std::string said = error.what();
            return said.find(held.path) == 0 &&
                           said.find("look at the rights of the file and its folder") != std::string::npos
                       ? 0
                       : 2;
          }
          return 3;
        }) == 0);
}

TEST_CASE("writes pending beside a book whose folder cannot be written are not passed over") {
  const Folder folder, from;
  const std::string path = folder.path();
  {
    // A copy made while the writer is open has its newest acts in the -wal file only.
    Book book = Book::create(from.path(), head("new"));
    fill(book);
    fs::copy_file(from.path(), path);
    fs::copy_file(from.path() + "-wal", path + "-wal");
  }
  REQUIRE(fs::file_size(path + "-wal") > 0);
  fs::permissions(fs::path(path).parent_path(), kReadOnlyFolder);
  CHECK(as_nobody([&] {
          try {
            (void)Book::open_to_read(path);
          } catch (const StoreError& error) {
            return error.what() == path + " has writes pending in " + path +
                                       "-wal and its folder cannot be written; copy both to another folder"
                       ? 0
                       : 1;
          }
          return 2;
        }) == 0);
  fs::permissions(fs::path(path).parent_path(), fs::perms::owner_all);
  CHECK(Book::open_to_read(path).newest_act() == 6);
}

TEST_CASE("network file systems are known by the numbers of statfs(2)") {
  CHECK(std::string(store::network_name(0x6969)) == "NFS");
  CHECK(std::string(store::network_name(0xff534d42L)) == "CIFS");
  CHECK(std::string(store::network_name(static_cast<int>(0xff534d42))) == "CIFS");  // as a negative number
  CHECK(store::network_name(0xef53) == nullptr);                                    // ext4
  CHECK(store::network_name(0x01021994) == nullptr);                                // tmpfs
}
