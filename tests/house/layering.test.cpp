// src keeps the rules of the house; and a made tree that breaks each of them shows that the check can fail.

#include <unistd.h>

#include <fstream>

#include "house/house_rules.hpp"

namespace fs = std::filesystem;

namespace {

/// A folder tree that is removed at the end.
class MadeTree {
 public:
  MadeTree() : root_(fs::temp_directory_path() / ("scourbook-house-" + std::to_string(::getpid()))) {
    fs::remove_all(root_);
    fs::create_directories(root_);
  }
  ~MadeTree() { fs::remove_all(root_); }
  MadeTree(const MadeTree&) = delete;
  MadeTree& operator=(const MadeTree&) = delete;

  void write(const std::string& name, const std::string& text) const {
    fs::create_directories((root_ / name).parent_path());
    std::ofstream(root_ / name) << text;
  }
  [[nodiscard]] std::string breaches() const { return house::describe(house::check(root_)); }

 private:
  fs::path root_;
};

/// Three folders that keep the rules.
void fill(const MadeTree& tree) {
  tree.write("terms/CMakeLists.txt", "scourbook_folder(terms LIBRARIES date::date)\n");
  tree.write("terms/time.hpp", "#pragma once\n#include <chrono>\n");
  tree.write("store/CMakeLists.txt", "scourbook_folder(store USES terms LIBRARIES SQLiteCpp)\n");
  tree.write("store/book.cpp",
             "#include <SQLiteCpp/SQLiteCpp.h>\n#include \"terms/time.hpp\"\nauto q = \"SELECT 1\";\n");
  tree.write("rating/CMakeLists.txt", "scourbook_folder(rating USES terms)\n");
  tree.write("rating/fit.cpp",
             "#include \"rating/fit.hpp\"\n// An update of the curve is selected, then inserted.\n");
  tree.write("rating/fit.hpp", "#pragma once\n#include \"terms/time.hpp\"\n");
}

}  // namespace

TEST_CASE("src keeps the rules of the house") {
  const auto breaches = house::check(fs::path(SCOURBOOK_TESTS_DIR).parent_path() / "src");
  INFO(house::describe(breaches));
  CHECK(breaches.empty());
}

TEST_CASE("a tree that keeps the rules has no breach") {
  const MadeTree tree;
  fill(tree);
  CHECK(tree.breaches().empty());
}

TEST_CASE("an include against the flow is named with file and line") {
  const MadeTree tree;
  fill(tree);
  tree.write("terms/act.cpp", "\n#include \"rating/fit.hpp\"\n");
  CHECK(tree.breaches() == "terms/act.cpp:2: terms includes against the flow: \"rating/fit.hpp\"\n");
}

TEST_CASE("folders of equal rank do not know each other") {
  const MadeTree tree;
  fill(tree);
  tree.write("cli/CMakeLists.txt", "scourbook_folder(cli USES terms)\n");
  tree.write("cli/run.cpp", "#include \"view/page.hpp\"\n");
  tree.write("view/CMakeLists.txt", "scourbook_folder(view USES terms cli)\n");
  tree.write("view/page.hpp", "#pragma once\n  #  include \"cli/run.hpp\"\n");
  CHECK(tree.breaches() ==
        "cli/run.cpp:1: cli includes against the flow: \"view/page.hpp\"\n"
        "view/page.hpp:2: view includes against the flow: \"cli/run.hpp\"\n"
        "view/CMakeLists.txt: uses against the flow: cli\n");
}

TEST_CASE("a folder without a rank, and a file outside the folders, fail") {
  const MadeTree tree;
  fill(tree);
  tree.write("util/strings.hpp", "#pragma once\n");
  tree.write("main.cpp", "int main() {}\n");
  tree.write("rating/more.cpp", "#include \"util/strings.hpp\"\n#include \"fit.hpp\"\n");
  CHECK(tree.breaches() ==
        "main.cpp: stands in no folder of src\n"
        "rating/more.cpp:1: includes a folder without a rank: \"util/strings.hpp\"\n"
        "rating/more.cpp:2: include is not written from src: \"fit.hpp\"\n"
        "util: folder without a rank\n");
}

TEST_CASE("SQL and the database stay in store") {
  const MadeTree tree;
  fill(tree);
  tree.write("rating/sql.cpp",
             "#include <sqlite3.h>\n#include <SQLiteCpp/Database.h>\nauto a = \"SELECT x\";\n"
             "auto b = \"INSERT INTO t\";\nauto c = R\"(CREATE TABLE t)\";\nauto d = \"select x from t\";\n");
  CHECK(tree.breaches() ==
        "rating/sql.cpp:1: only store knows the database: <sqlite3.h>\n"
        "rating/sql.cpp:2: only store knows the database: <SQLiteCpp/Database.h>\n"
        "rating/sql.cpp:3: SQL outside store: SELECT\n"
        "rating/sql.cpp:4: SQL outside store: INSERT\n"
        "rating/sql.cpp:5: SQL outside store: CREATE TABLE\n"
        "rating/sql.cpp:6: SQL outside store: \"select \n");
}

TEST_CASE("pure folders do no input or output, headers are included once") {
  const MadeTree tree;
  fill(tree);
  tree.write("rating/print.hpp", "#include <iostream>\n");
  CHECK(tree.breaches() ==
        "rating/print.hpp:1: rating is pure and does no input or output: <iostream>\n"
        "rating/print.hpp:1: header without #pragma once\n");
}

TEST_CASE("CMake names what a folder includes") {
  const MadeTree tree;
  fill(tree);
  tree.write("rating/CMakeLists.txt", "scourbook_folder(fitting USES replay)\n");
  tree.write("store/CMakeLists.txt", "add_library(x)\n");
  CHECK(tree.breaches() ==
        "rating/CMakeLists.txt: makes a library of another name: fitting\n"
        "rating/CMakeLists.txt: uses against the flow: replay\n"
        "rating/CMakeLists.txt: USES lacks terms, included in rating/fit.hpp:2\n"
        "store/CMakeLists.txt: calls no scourbook_folder\n");
}
