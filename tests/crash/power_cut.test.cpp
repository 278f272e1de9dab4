// The power goes at the first, second, third ... operation that changes a file, until a run ends without:
// each time the book opens again with all of the act or nothing of it, and verify() finds nothing wrong. Each
// run is a process of its own, which ends where the power goes.

#include <catch2/catch.hpp>

#include <sys/wait.h>
#include <unistd.h>

#include <functional>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::FailingFileSystem;
using store::StoreError;
using Unsynced = store::FailingFileSystem::Unsynced;

namespace {

namespace fs = std::filesystem;

constexpr int kDone = 10, kCut = 11, kAcknowledged = 12;

/// What the child process came to: kDone, kCut, or kAcknowledged where the power went after commit() had
/// returned.
int in_child(const std::function<void(bool& acknowledged)>& work, std::int64_t cut_at, Unsynced unsynced) {
  const pid_t child = fork();
  if (child == 0) {
    bool acknowledged = false;
    try {
      FailingFileSystem system;
      system.cut_at(cut_at, unsynced, [&] { _exit(acknowledged ? kAcknowledged : kCut); });
      work(acknowledged);
      _exit(kDone);
    } catch (...) {
      _exit(99);
    }
  }
  int status = 0;
  waitpid(child, &status, 0);
  return WIFEXITED(status) ? WEXITSTATUS(status) : 98;
}

/// One act over nearly every table, with stage of two months.
Act large_act(Book& book) {
  auto writer = book.begin(head("large"));
  const auto file = writer.add_file("large.csv", 1, std::string(64, '0'), "stage");
  writer.add(gauging("G9", "2020-03-01T10:00Z", 2.2, 4.1), {file, 8});
  writer.add(survey("S9", "2020-03-15T10:00Z"), {file, 5}, {5, 6, 7});
  (void)writer.add_stage(series("2020-02-20T00:00Z", 1500, 700, 15), file);
  RatingCurve made = curve({{1, 1}});
  made.survey = "S9";
  made.parent = 1;
  const int number = writer.add_curve(made).number;
  Edition edition;
  edition.station = kStation;
  edition.parent = 1;
  edition.periods = {{at("2020-03-15T10:00Z"), {}, number, NoCurve::other, Millis(0)}};
  (void)writer.add_edition(edition);
  (void)writer.add_publication(publication(1));
  return writer.commit();
}

/// A full book with many pieces of January.
void make_base(const std::string& path) {
  const FailingFileSystem no_syncs;
  Book book = Book::create(path, head("new"));
  fill(book);
  for (int i = 0; i < 33; ++i) take(book, series("2020-01-05T00:00Z", 2, 100 + i), i > 0);
}

using Content = std::map<std::string, std::vector<std::string>>;

Content content_of(const std::string& path) {
  auto db = plain::open(path);
  return plain::content(db);
}

void copy_book(const std::string& from, const std::string& to) {
  for (const char* end : {"-wal", "-shm", "-journal"}) fs::remove(to + end);
  fs::copy_file(from, to, fs::copy_options::overwrite_existing);
}

std::string name_of(Unsynced unsynced) {
  return unsynced == Unsynced::lost ? "lost" : unsynced == Unsynced::kept ? "kept" : "half of the last";
}

/// Acts are timed alike in every run, so that their content can be compared.
struct SameClock {
  SameClock() {
    store::use_clock([] { return at("2024-06-01T00:00Z"); });
  }
  ~SameClock() { store::use_clock({}); }
};

}  // namespace

TEST_CASE("an act is in the book whole or not at all, wherever the power goes") {
  const Folder folder;
  const SameClock clock;
  const std::string base = folder.path("base"), path = folder.path("cut");
  make_base(base);
  const Content before = content_of(base);
  copy_book(base, path);
  {
    Book book = Book::open_to_write(path);
    REQUIRE(large_act(book).tables.size() > 10);
  }
  const Content after = content_of(path);
  REQUIRE(after.at("stage_piece").size() >= before.at("stage_piece").size() + 2);

  for (const Unsynced unsynced : {Unsynced::lost, Unsynced::kept, Unsynced::half_of_the_last}) {
    int cuts = 0, kept_before = 0, kept_after = 0, acknowledged_cuts = 0;
    for (std::int64_t n = 1;; ++n) {
      CAPTURE(name_of(unsynced), n);
      copy_book(base, path);
      const int ended = in_child(
          [&](bool& acknowledged) {
            Book book = Book::open_to_write(path);
            (void)large_act(book);
            acknowledged = true;
          },
          n, unsynced);
      REQUIRE((ended == kDone || ended == kCut || ended == kAcknowledged));
      {
        const Book book = Book::open_to_read(path);
        CHECK(book.verify().empty());
      }
      const Content now = content_of(path);
      const bool is_before = now == before, is_after = now == after;
      CHECK((is_before || is_after));
      if (ended != kCut) CHECK(is_after);
      if (ended == kDone) break;
      ++cuts;
      kept_before += is_before;
      kept_after += is_after;
      acknowledged_cuts += ended == kAcknowledged;
      if (n % 8 != 0) continue;
      // Work goes on where it stopped.
      const FailingFileSystem no_syncs;
      Book book = Book::open_to_write(path);
      (void)take(book, series("2022-01-01T00:00Z", 3, 5));
      CHECK(book.verify().empty());
    }
    CAPTURE(name_of(unsynced), cuts, kept_before, kept_after, acknowledged_cuts);
    CHECK(cuts > 20);
    CHECK(kept_before > 0);
    CHECK(kept_after > 0);
    CHECK(acknowledged_cuts > 0);
  }
}

TEST_CASE("a new book is whole or none, wherever the power goes") {
  const SameClock clock;
  for (const Unsynced unsynced : {Unsynced::lost, Unsynced::kept, Unsynced::half_of_the_last}) {
    int none = 0, whole = 0;
    for (std::int64_t n = 1;; ++n) {
      CAPTURE(name_of(unsynced), n);
      const Folder folder;
      const int ended = in_child(
          [&](bool& acknowledged) {
            const Book book = Book::create(folder.path(), head("new"));
            acknowledged = true;
          },
          n, unsynced);
      REQUIRE((ended == kDone || ended == kCut || ended == kAcknowledged));
      bool is_book = true;
      try {
        const Book book = Book::open_to_read(folder.path());
        CHECK(book.verify().empty());
        CHECK(book.newest_act() == 1);
        CHECK(book.settings().longest_gap_minutes == 360);
      } catch (const StoreError& error) {
        CAPTURE(error.what());
        CHECK(error.kind() == StoreError::Kind::not_a_book);
        is_book = false;
      }
      if (ended != kCut) CHECK(is_book);
      if (ended == kDone) break;
      ++(is_book ? whole : none);
    }
    CAPTURE(name_of(unsynced), none, whole);
    CHECK(none > 0);
    CHECK(whole > 0);
  }
}

TEST_CASE("a full disk is told, nothing is stored, and the book goes on when there is room again") {
  const Folder folder;
  const SameClock clock;
  const std::string base = folder.path("base"), path = folder.path("full");
  make_base(base);
  const Content before = content_of(base);
  int refusals = 0;
  for (std::int64_t n = 1;; ++n) {
    CAPTURE(n);
    copy_book(base, path);
    FailingFileSystem system;
    bool stored = false;
    {
      Book book = Book::open_to_write(path);
      system.full_at(n);
      try {
        (void)large_act(book);
        stored = true;
      } catch (const StoreError& error) {
        CAPTURE(error.what());
        CHECK(error.kind() == StoreError::Kind::io);
        CHECK(std::string(error.what()).find("the disk is full") == 0);
      }
      const bool failed_meanwhile = system.has_failed();
      system.restore();
      if (!stored) {
        REQUIRE(failed_meanwhile);
        ++refusals;
        CHECK(book.newest_act() == 39);
        CHECK(book.verify().empty());
        CHECK(large_act(book).number == 40);
        CHECK(book.verify().empty());
      }
    }
    if (stored) break;
  }
  CHECK(refusals > 5);
  CHECK(content_of(base) == before);
}
