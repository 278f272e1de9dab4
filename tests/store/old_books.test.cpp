// Books of every schema that was ever landed open, check as sound and say what they said.
//
// tests/books/schema_N.scourbook was made by the program of its time with the steps of
// tests/scripts/one_control.script up to its first publication, then closed. It is never made anew.

#include <catch2/catch.hpp>

#include <algorithm>
#include <filesystem>

#include "store/book.hpp"

using namespace scourbook;
namespace fs = std::filesystem;

namespace {

/// A copy, so that the committed file stays as it is.
class Copy {
 public:
  explicit Copy(const std::string& name) : path_(fs::temp_directory_path() / ("copy-" + name)) {
    fs::copy_file(fs::path(SCOURBOOK_TESTS_DIR) / "books" / name, path_,
                  fs::copy_options::overwrite_existing);
    fs::permissions(path_, fs::perms::owner_read | fs::perms::owner_write);
  }
  ~Copy() {
    for (const char* ending : {"", "-wal", "-shm"}) fs::remove(path_.string() + ending);
  }
  [[nodiscard]] std::string path() const { return path_.string(); }

 private:
  fs::path path_;
};

}  // namespace

TEST_CASE("a book of schema 1 opens, is sound, and says what it said") {
  const Copy copy("schema_1.scourbook");
  const auto book = store::Book::open_to_read(copy.path());
  for (const auto& damage : book.verify())
    UNSCOPED_INFO(damage.table << " " << damage.act << ": " << damage.text);
  CHECK(book.verify().empty());
  CHECK(book.newest_act() == 9);

  REQUIRE(book.stations().size() == 1);
  CHECK(book.stations()[0].value.name == "Fallow Weir House");
  CHECK(book.gaugings("QUE-1").size() == 9);
  CHECK(book.survey("QUE-1", "Q2021")->value.points.size() == 9);
  CHECK(book.curves("QUE-1").size() == 2);

  const auto edition = book.newest_edition("QUE-1");
  REQUIRE(edition);
  REQUIRE(edition->periods.size() == 2);
  CHECK(edition->periods[1].curve == 2);
  CHECK(edition->periods[1].blend == std::chrono::hours(6));

  const auto publication = book.publication("QUE-1", 1);
  REQUIRE(publication);
  REQUIRE(publication->months.size() == 1);
  // 2021-02-21T06:00+02:00: 20.0 m3/s, in thousandths
  const auto& month = publication->months[0];
  const auto time = to_ms(parse_time("2021-02-21T06:00+02:00", {}).time);
  const auto at = std::find(month.time_ms.begin(), month.time_ms.end(), time);
  REQUIRE(at != month.time_ms.end());
  CHECK(month.value[static_cast<std::size_t>(at - month.time_ms.begin())] == 20'000);
}
