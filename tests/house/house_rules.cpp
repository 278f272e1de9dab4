#include "house_rules.hpp"

#include <algorithm>
#include <fstream>
#include <iterator>
#include <map>
#include <regex>
#include <set>
#include <sstream>

namespace house {
namespace {

namespace fs = std::filesystem;

/// The order in which data flows. Folders of equal rank do not know each other.
const std::map<std::string, int> kRanks = {
    {"terms", 0}, {"hydraulics", 1},   {"store", 1},   {"fieldfile", 2}, {"rating", 2},
    {"shift", 3}, {"rederivation", 3}, {"history", 4}, {"replay", 5},    {"publish", 6},
    {"cli", 7},   {"view", 7},         {"app", 8}};

/// Folders of pure computation: no files, no streams, no log.
const std::set<std::string> kPure = {"terms", "hydraulics", "rating", "shift", "rederivation"};

class Checker {
 public:
  explicit Checker(fs::path src) : src_(std::move(src)) {}

  std::vector<Breach> run() {
    std::vector<fs::path> entries(fs::directory_iterator(src_), fs::directory_iterator{});
    std::sort(entries.begin(), entries.end());
    for (const auto& entry : entries) {
      if (!fs::is_directory(entry)) {
        if (is_source(entry)) report(entry, 0, "stands in no folder of src");
      } else if (rank_of(entry.filename().string()) < 0) {
        report(entry, 0, "folder without a rank");
      } else {
        check_folder(entry);
      }
    }
    return std::move(breaches_);
  }

 private:
  static bool is_source(const fs::path& path) {
    return path.extension() == ".cpp" || path.extension() == ".hpp";
  }

  void report(const fs::path& path, std::size_t line, std::string what) {
    breaches_.push_back({fs::relative(path, src_).generic_string(), line, std::move(what)});
  }

  void check_folder(const fs::path& folder) {
    folder_ = folder.filename().string();
    included_.clear();
    std::vector<fs::path> files;
    for (const auto& entry : fs::recursive_directory_iterator(folder)) {
      if (entry.is_regular_file() && is_source(entry.path())) files.push_back(entry.path());
    }
    std::sort(files.begin(), files.end());
    if (files.empty()) return;
    for (const auto& file : files) check_file(file);
    check_uses(folder / "CMakeLists.txt");
  }

  void check_file(const fs::path& file) {
    std::ifstream in(file);
    std::size_t number = 0;
    bool once = false;
    for (std::string line; std::getline(in, line);) {
      ++number;
      once = once || line.rfind("#pragma once", 0) == 0;
      check_include(file, number, line);
      check_sql(file, number, line);
    }
    if (file.extension() == ".hpp" && !once) report(file, 1, "header without #pragma once");
  }

  void check_include(const fs::path& file, std::size_t number, const std::string& line) {
    static const std::regex include(R"(^\s*#\s*include\s*([<"])([^>"]+)[>"])");
    std::smatch match;
    if (!std::regex_search(line, match, include)) return;
    const std::string path = match[2];
    if (match[1] == "<") return check_outside(file, number, path);
    const auto slash = path.find('/');
    if (slash == std::string::npos || path.rfind("..", 0) == 0) {
      return report(file, number, "include is not written from src: \"" + path + "\"");
    }
    const std::string target = path.substr(0, slash);
    if (target == folder_) return;
    const int rank = rank_of(target);
    if (rank < 0) return report(file, number, "includes a folder without a rank: \"" + path + "\"");
    if (rank >= rank_of(folder_)) {
      return report(file, number, folder_ + " includes against the flow: \"" + path + "\"");
    }
    included_.insert({target, {fs::relative(file, src_).generic_string(), number}});
  }

  void check_outside(const fs::path& file, std::size_t number, const std::string& path) {
    static const std::regex database("sqlite", std::regex::icase);
    static const std::set<std::string> outer = {"fstream", "iostream", "filesystem"};
    if (folder_ != "store" && std::regex_search(path, database)) {
      report(file, number, "only store knows the database: <" + path + ">");
    }
    if (kPure.count(folder_) != 0 && (outer.count(path) != 0 || path.rfind("spdlog/", 0) == 0)) {
      report(file, number, folder_ + " is pure and does no input or output: <" + path + ">");
    }
  }

  void check_sql(const fs::path& file, std::size_t number, const std::string& line) {
    static const std::regex sql(
        R"(\b(SELECT|INSERT|UPDATE|DELETE FROM|CREATE (TABLE|VIEW|TRIGGER|INDEX)|PRAGMA)\b)"
        R"(|"\s*(select|insert into|create table|delete from|pragma) )");
    if (folder_ == "store") return;
    std::smatch match;
    if (std::regex_search(line, match, sql)) report(file, number, "SQL outside store: " + match[0].str());
  }

  /// What CMake links must be what the files include, each named by itself; and nothing of equal or higher
  /// rank.
  void check_uses(const fs::path& path) {
    std::ifstream in(path);
    if (!in) return report(path, 0, "missing");
    const std::string text{std::istreambuf_iterator<char>(in), {}};
    static const std::regex call(R"(scourbook_folder\(\s*([^\s)]+)([^)]*)\))");
    std::smatch match;
    if (!std::regex_search(text, match, call)) {
      if (folder_ != "app") report(path, 0, "calls no scourbook_folder");
      return;
    }
    if (match[1] != folder_) report(path, 0, "makes a library of another name: " + match[1].str());
    std::set<std::string> uses;
    bool in_uses = false;
    std::istringstream words(match[2]);
    for (std::string word; words >> word;) {
      if (word == "USES" || word == "LIBRARIES") {
        in_uses = word == "USES";
      } else if (in_uses) {
        uses.insert(word);
      }
    }
    for (const auto& use : uses) {
      if (rank_of(use) < 0 || rank_of(use) >= rank_of(folder_))
        report(path, 0, "uses against the flow: " + use);
    }
    for (const auto& [target, place] : included_) {
      if (uses.count(target) == 0) {
        report(path, 0,
               "USES lacks " + target + ", included in " + place.first + ":" + std::to_string(place.second));
      }
    }
  }

  fs::path src_;
  std::string folder_;
  std::map<std::string, std::pair<std::string, std::size_t>> included_;  ///< folder -> first file and line
  std::vector<Breach> breaches_;
};

}  // namespace

int rank_of(const std::string& folder) {
  const auto found = kRanks.find(folder);
  return found == kRanks.end() ? -1 : found->second;
}

std::string describe(const std::vector<Breach>& breaches) {
  std::string text;
  for (const auto& b : breaches) {
    text += b.file + (b.line > 0 ? ":" + std::to_string(b.line) : "") + ": " + b.what + "\n";
  }
  return text;
}

std::vector<Breach> check(const std::filesystem::path& src) {
  return Checker(src).run();
}

}  // namespace house
