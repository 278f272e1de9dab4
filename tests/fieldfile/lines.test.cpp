#include "fieldfile/lines.hpp"

#include "fieldfile_texts.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

namespace {

/// Gives the same character for ever, and counts what it gave.
class Endless : public ByteSource {
 public:
  Endless(std::string start, char fill) : start_(std::move(start)), fill_(fill) {}
  std::size_t read(char* to, std::size_t size) override {
    for (std::size_t i = 0; i < size; ++i) to[i] = given_ + i < start_.size() ? start_[given_ + i] : fill_;
    given_ += size;
    REQUIRE(given_ < 64u << 20);  // a reader that goes on for ever fails here
    return size;
  }
  const ByteFault& fault() const override { return none_; }
  std::size_t given() const { return given_; }

 private:
  std::string start_;
  char fill_;
  std::size_t given_ = 0;
  ByteFault none_;
};

std::vector<std::string> lines_of(const std::string& text, std::size_t longest = 1000) {
  MemoryBytes bytes(text);
  Limits limits;
  limits.longest_line = longest;
  LineReader reader(bytes, limits);
  std::vector<std::string> lines;
  std::string_view line;
  while (reader.next(line) == LineReader::Status::line) lines.emplace_back(line);
  return lines;
}

using Lines = std::vector<std::string>;

}  // namespace

TEST_CASE("lines end in LF, CRLF or the end of the file") {
  CHECK(lines_of("") == Lines{});
  CHECK(lines_of("a") == Lines{"a"});
  CHECK(lines_of("a\nb\r\nc") == Lines{"a", "b", "c"});
  CHECK(lines_of("a\n\n") == Lines{"a", ""});
  CHECK(lines_of("\xEF\xBB\xBF"
                 "a\n\xEF\xBB\xBF"
                 "b") == Lines{"a",
                               "\xEF\xBB\xBF"
                               "b"});
}

TEST_CASE("lines of every length pass through a small buffer unchanged") {
  std::string text;
  Lines expected;
  for (std::size_t length = 0; length <= 60; ++length) {
    expected.emplace_back(length, static_cast<char>('a' + length % 26));
    text += expected.back() + (length % 2 == 0 ? "\n" : "\r\n");
  }
  CHECK(lines_of(text, 60) == expected);
  CHECK(lines_of(text, 59).size() == 60);  // the last one is too long
}

TEST_CASE("one endless line is a finding, in bounded memory and without reading on") {
  Endless source("station,time,stage_m\n", 'x');
  KnownStations known = two_stations();
  const ParsedFile file = read_records(source, "big.csv", known);
  CHECK(describe(file.findings) ==
        "big.csv:2: the line is longer than 1048576 bytes\n"
        "  expected: a table: lines that end in LF or CRLF\n"
        "1 fault found\n");
  CHECK(source.given() < 3u << 20);
  Endless first("", 'x');
  CHECK(describe(read_records(first, "big.csv", known).findings) ==
        "big.csv:1: the line is longer than 1048576 bytes\n"
        "  expected: a table: lines that end in LF or CRLF\n"
        "1 fault found\n");
}

TEST_CASE("an endless quoted field is a finding as well") {
  Endless source("station,name,utc_offset\nTAR-1,\"Mill", '\n');
  KnownStations known;
  const ParsedFile file = read_records(source, "big.csv", known);
  REQUIRE(file.findings.size() == 1);
  CHECK(file.findings[0].line == 2);
  CHECK(file.findings[0].column == 7);
  CHECK(file.findings[0].fault == "this quote is never closed");
  CHECK(source.given() < 4u << 20);
}

TEST_CASE("findings beyond the limit are counted, not kept") {
  std::string text = "station,valid_from,gauge_zero_m\n";
  for (int i = 0; i < 20; ++i) text += "TAR-1,2010-01-01,x\n";
  ReadOptions options;
  options.limits.most_findings = 3;
  const ParsedFile file = read_text(text, options);
  REQUIRE(file.findings.size() == 4);
  CHECK(describe(file.findings[3]) ==
        "x.csv: 17 more faults are not listed\n"
        "  to do: mend those listed and take the file in again\n");
}
