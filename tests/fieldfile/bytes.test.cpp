#include "fieldfile/bytes.hpp"

#include <zlib.h>

#include <random>

#include "fieldfile_texts.hpp"
#include "folder.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

namespace {

std::string packed(const std::string& text) {
  z_stream stream{};
  REQUIRE(deflateInit2(&stream, 6, Z_DEFLATED, 15 + 16, 8, Z_DEFAULT_STRATEGY) == Z_OK);
  std::string out(deflateBound(&stream, text.size()) + 64, '\0');
  stream.next_in = reinterpret_cast<Bytef*>(const_cast<char*>(text.data()));
  stream.avail_in = static_cast<uInt>(text.size());
  stream.next_out = reinterpret_cast<Bytef*>(out.data());
  stream.avail_out = static_cast<uInt>(out.size());
  REQUIRE(deflate(&stream, Z_FINISH) == Z_STREAM_END);
  out.resize(stream.total_out);
  deflateEnd(&stream);
  return out;
}

/// All bytes, asked for in pieces of `step`.
std::string all_of(ByteSource& source, std::size_t step = 1000) {
  std::string all;
  std::string piece(step, '\0');
  while (const std::size_t got = source.read(piece.data(), step)) all.append(piece, 0, got);
  return all;
}

std::string fault_of(const std::string& path) {
  FileBytes bytes(path);
  all_of(bytes);
  return bytes.fault().fault;
}

std::string some_text(std::size_t size) {
  std::mt19937 random(11);
  std::string text(size, ' ');
  for (char& c : text) c = static_cast<char>('a' + random() % 20);
  return text;
}

// SHA-256 of "abc": FIPS 180-2, appendix B.1.
const std::string kShaOfAbc = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";

}  // namespace

TEST_CASE("a file is read whole, counted and hashed as given") {
  const Folder folder;
  FileBytes small(folder.write("abc.csv", "abc"));
  CHECK(all_of(small, 1) == "abc");
  CHECK(small.bytes() == 3);
  CHECK(small.sha256() == kShaOfAbc);
  const std::string text = some_text(700'001);
  std::int64_t seen = 0;
  FileBytes large(folder.write("large.csv", text), [&](std::int64_t count) { seen += count; });
  CHECK(all_of(large) == text);
  CHECK(seen == 700'001);
}

TEST_CASE("gzip is unpacked, by its content and not its name; size and hash are of the packed bytes") {
  const Folder folder;
  const std::string text = some_text(600'000);
  const std::string gzip = packed(text);
  for (const char* name : {"a.csv.gz", "a.csv"}) {
    FileBytes bytes(folder.write(name, gzip));
    CHECK(all_of(bytes) == text);
    CHECK_FALSE(bytes.fault().any());
    CHECK(bytes.bytes() == static_cast<std::int64_t>(gzip.size()));
    FileBytes as_given(folder.write("plain.bin", "x" + gzip));
    FileBytes again(folder.path(name));
    all_of(again);
    CHECK(again.sha256() == bytes.sha256());
  }
}

TEST_CASE("a gzip file of several members is their texts end to end") {
  const Folder folder;
  FileBytes bytes(folder.write("a.gz", packed("one,") + packed("two,") + packed("")));
  CHECK(all_of(bytes) == "one,two,");
  CHECK_FALSE(bytes.fault().any());
}

TEST_CASE("gzip cut off at any byte is a fault, never a short file") {
  const Folder folder;
  const std::string gzip = packed("station,time,stage_m\nTAR-1,2010-01-01,1.2\n");
  for (std::size_t keep = 0; keep < gzip.size(); ++keep) {
    INFO(keep);
    CHECK_FALSE(fault_of(folder.write("a.csv.gz", gzip.substr(0, keep))).empty());
  }
  CHECK(fault_of(folder.write("a.csv.gz", gzip.substr(0, 20))) == "the gzip data end too early");
  CHECK(fault_of(folder.write("a.csv.gz", "")) == "the name ends in .gz but the content is not gzip");
}

TEST_CASE("damaged gzip is a fault") {
  const Folder folder;
  std::string gzip = packed(some_text(5'000));
  for (std::size_t at = 10; at < gzip.size(); at += 97) {
    std::string damaged = gzip;
    damaged[at] = static_cast<char>(damaged[at] ^ 0x55);
    INFO(at);
    CHECK_FALSE(fault_of(folder.write("a.gz", damaged)).empty());
  }
  CHECK(fault_of(folder.write("a.gz", gzip + "trailing")) == "the gzip data are damaged");
  CHECK(fault_of(folder.write("a.gz", "station,time\n")) ==
        "the name ends in .gz but the content is not gzip");
}

TEST_CASE("what is no file is a finding") {
  const Folder folder;
  const std::string missing = folder.path("none.csv");
  KnownStations known;
  FileBytes none(missing);
  CHECK(describe(read_records(none, "none.csv", known).findings) ==
        "none.csv: there is no such file\n"
        "  expected: the name of a field file\n"
        "  to do: check the name and the folder\n"
        "1 fault found\n");
  FileBytes directory(folder.path());
  CHECK(describe(read_records(directory, "folder", known).findings) ==
        "folder: is a folder, not a file\n"
        "  expected: the name of a field file\n"
        "  to do: name the files in it\n"
        "1 fault found\n");
  CHECK(fault_of("/dev/null") == "is no plain file");
}

TEST_CASE("a file that turns out damaged half way is one finding, whatever was read before") {
  const Folder folder;
  FileBytes bytes(
      folder.write("s.csv.gz", packed("station,time,stage_m\nTAR-1,2010-01-01T00:00Z,1.2\n").substr(0, 55)));
  KnownStations known = two_stations();
  CHECK(describe(read_records(bytes, "s.csv.gz", known).findings) ==
        "s.csv.gz: the gzip data end too early\n"
        "  expected: a whole gzip file\n"
        "  to do: copy or pack the file again\n"
        "1 fault found\n");
}
