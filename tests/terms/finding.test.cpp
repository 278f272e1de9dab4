#include "terms/finding.hpp"

using namespace scourbook;

namespace {

Finding finding_at(std::size_t column, std::size_t width, const std::string& line) {
  Finding finding;
  finding.file = "zero.csv";
  finding.line = 3;
  finding.column = column;
  finding.width = width;
  finding.fault = "fault";
  show_line(finding, line);
  return finding;
}

}  // namespace

TEST_CASE("a finding shows place, text with caret, rule and way on") {
  Finding finding = finding_at(25, 6, "TAR-1,2015-01-01T00:00Z,\"12,5\"");
  finding.fault = "gauge_zero_m is not a number: \"12,5\"";
  finding.expected = "a decimal number with a point, for example 12.5";
  finding.remedy = "write 12.5";
  CHECK(describe(finding) ==
        "zero.csv:3:25: gauge_zero_m is not a number: \"12,5\"\n"
        "    TAR-1,2015-01-01T00:00Z,\"12,5\"\n"
        "                            ^~~~~~\n"
        "  expected: a decimal number with a point, for example 12.5\n"
        "  to do: write 12.5\n");
}

TEST_CASE("a finding about a whole file or a whole line has no caret") {
  Finding finding;
  finding.file = "a.csv";
  finding.fault = "the file is empty";
  CHECK(describe(finding) == "a.csv: the file is empty\n");
  CHECK(describe(finding_at(0, 1, "a,b")) == "zero.csv:3: fault\n    a,b\n");
}

TEST_CASE("the caret counts characters, and follows tabs") {
  CHECK(describe(finding_at(7, 2, "Mühle,ab,c")) == "zero.csv:3:7: fault\n    Mühle,ab,c\n          ^~\n");
  CHECK(describe(finding_at(4, 1, "a,\tb")) == "zero.csv:3:4: fault\n    a,\tb\n      \t^\n");
}

TEST_CASE("a caret behind the line's end and a width beyond it stay in place") {
  CHECK(describe(finding_at(4, 1, "a,b")) == "zero.csv:3:4: fault\n    a,b\n       ^\n");
  CHECK(describe(finding_at(3, 50, "a,b")) == "zero.csv:3:3: fault\n    a,b\n      ^\n");
}

TEST_CASE("long lines are cut around the column, dots for what is left out") {
  const std::string line = std::string(500, 'x') + "Y" + std::string(500, 'z');
  const Finding middle = finding_at(501, 1, line);
  CHECK(count_characters(middle.text) == 103);
  CHECK(middle.text == "..." + std::string(37, 'x') + "Y" + std::string(59, 'z') + "...");
  CHECK(describe(middle) ==
        "zero.csv:3:501: fault\n    " + middle.text + "\n    " + std::string(40, ' ') + "^\n");
  const Finding start = finding_at(2, 1, line);
  CHECK(start.text == std::string(100, 'x') + "...");
  const Finding end = finding_at(1001, 1, line);
  CHECK(end.text == "..." + std::string(97, 'z'));
  CHECK(describe(end) == "zero.csv:3:1001: fault\n    " + end.text + "\n    " + std::string(99, ' ') + "^\n");
}

TEST_CASE("what cannot be printed becomes the replacement character") {
  CHECK(finding_at(1, 1, "a\x1B[31m\xFF").text == "a\xEF\xBF\xBD[31m\xEF\xBF\xBD");
  CHECK(in_quotes("a\tb\nc") ==
        "\"a\xEF\xBF\xBD"
        "b\xEF\xBF\xBD"
        "c\"");
  CHECK(in_quotes(std::string(50, 'a'), 10) == "\"" + std::string(10, 'a') + "...\"");
}

TEST_CASE("the list ends with its count, and says when it is cut") {
  Finding finding;
  finding.file = "a.csv";
  finding.fault = "f";
  CHECK(describe(Findings{finding}) == "a.csv: f\n1 fault found\n");
  CHECK(describe(Findings(3, finding), 2) == "a.csv: f\na.csv: f\n3 faults found; the first 2 are shown\n");
}

TEST_CASE("UTF-8 is told from other bytes (RFC 3629)") {
  for (const char* good : {"", "plain", "caf\xC3\xA9", "\xE2\x82\xAC", "\xF0\x9F\x8C\x8A", "\xED\x9F\xBF",
                           "\xF4\x8F\xBF\xBF", "eight bytes and more \xC3\xA9"}) {
    CHECK(is_utf8(good));
  }
  // Stray continuation, overlong, surrogate, beyond U+10FFFF, cut off.
  for (const char* bad :
       {"\x80", "\xC0\x80", "\xC1\xBF", "\xE0\x9F\xBF", "\xED\xA0\x80", "\xF0\x8F\xBF\xBF",
        "\xF4\x90\x80\x80", "\xF5\x80\x80\x80", "\xC3", "\xE2\x82", "long enough a text \xFF"}) {
    CHECK_FALSE(is_utf8(bad));
  }
  CHECK(count_characters("caf\xC3\xA9\xFF") == 5);
}
