#include "cli/table.hpp"

#include <catch2/catch.hpp>

using namespace scourbook::cli;

TEST_CASE("a table aligns by characters, not bytes, and leaves no space at the end of a line") {
  Table table({{"name"}, {"m3/s", Align::right}, {"remark"}});
  table.add({"Å", "1.5", "über"});
  table.add({"longer", "12.25", ""});
  CHECK(table.text(2) ==
        "  name     m3/s  remark\n"
        "  Å         1.5  über\n"
        "  longer  12.25\n");
}

TEST_CASE("text is wrapped at spaces, and a word longer than the line stays whole") {
  CHECK(wrapped("one two three", 2, 9) == "  one two\n  three\n");
  CHECK(wrapped("incomprehensibilities are long", 0, 10) == "incomprehensibilities\nare long\n");
  CHECK(wrapped("", 2, 10).empty());
}
