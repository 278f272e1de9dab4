// Runs script tests (script.hpp says what they are).
//
//   run_scripts [--renew] [--bin FOLDER]... SCRIPT...
//
// FOLDER stands first on PATH. --renew, or SCOURBOOK_RENEW=1, writes the output of this run into the scripts
// as the expected text; that is then read as a diff, line by line. Exit status: 0 as expected, 1 not, 2 no
// script.

#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <array>
#include <cstdio>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <regex>
#include <sstream>
#include <stdexcept>

#include "script.hpp"

namespace {

namespace fs = std::filesystem;
using scripts::Script;
using scripts::Step;
using scripts::StepKind;

struct Options {
  bool renew = false;
  std::string path = "/usr/local/bin:/usr/bin:/bin";
  std::vector<std::string> files;
};

/// A new folder, removed at the end.
class OwnFolder {
 public:
  OwnFolder() {
    std::string pattern = (fs::temp_directory_path() / "script-XXXXXX").string();
    if (mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("cannot make a folder like " + pattern);
    path_ = fs::canonical(pattern);
  }
  ~OwnFolder() {
    std::error_code ignored;
    fs::remove_all(path_, ignored);
  }
  OwnFolder(const OwnFolder&) = delete;
  OwnFolder& operator=(const OwnFolder&) = delete;
  [[nodiscard]] const fs::path& path() const { return path_; }

 private:
  fs::path path_;
};

std::string read_whole(const fs::path& path) {
  std::ifstream in(path, std::ios::binary);
  if (!in) throw std::runtime_error("cannot read it");
  return {std::istreambuf_iterator<char>(in), {}};
}

std::vector<std::string> environment(const fs::path& folder, const std::string& path) {
  std::vector<std::string> all = {"PATH=" + path, "HOME=" + folder.string(), "TMPDIR=" + folder.string(),
                                  "TZ=UTC0",      "LC_ALL=C.UTF-8",          "LANG=C.UTF-8"};
  for (const char* kept : {"ASAN_OPTIONS", "UBSAN_OPTIONS", "LSAN_OPTIONS"}) {
    if (const char* value = std::getenv(kept)) all.push_back(std::string(kept) + "=" + value);
  }
  return all;
}

struct Outcome {
  std::string text;
  int status = 0;
};

/// In the child: `command` by /bin/sh, nothing to read, both streams into `out`.
[[noreturn]] void become_shell(const std::string& command, const fs::path& folder, const std::string& path,
                               int out) {
  if (chdir(folder.c_str()) != 0 || freopen("/dev/null", "r", stdin) == nullptr) _exit(127);
  dup2(out, STDOUT_FILENO);
  dup2(out, STDERR_FILENO);
  auto variables = environment(folder, path);
  std::vector<char*> pointers;
  for (auto& variable : variables) pointers.push_back(variable.data());
  pointers.push_back(nullptr);
  execle("/bin/sh", "sh", "-c", command.c_str(), static_cast<char*>(nullptr), pointers.data());
  _exit(127);
}

Outcome run(const std::string& command, const fs::path& folder, const std::string& path) {
  int ends[2];
  if (pipe(ends) != 0) throw std::runtime_error("no pipe");
  const pid_t child = fork();
  if (child < 0) throw std::runtime_error("no process");
  if (child == 0) {
    close(ends[0]);
    become_shell(command, folder, path, ends[1]);
  }
  close(ends[1]);
  Outcome outcome;
  std::array<char, 4096> buffer{};
  for (ssize_t n; (n = read(ends[0], buffer.data(), buffer.size())) > 0;) {
    outcome.text.append(buffer.data(), static_cast<std::size_t>(n));
  }
  close(ends[0]);
  int status = 0;
  waitpid(child, &status, 0);
  outcome.status = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
  return outcome;
}

/// Output as lines of a script, masked, the status at the end where it is not 0.
std::vector<std::string> as_lines(Outcome outcome, const fs::path& folder, const std::vector<Step>& masks) {
  for (std::size_t at; (at = outcome.text.find(folder.string())) != std::string::npos;) {
    outcome.text.replace(at, folder.string().size(), "$FOLDER");
  }
  for (const Step& mask : masks) {
    outcome.text = std::regex_replace(outcome.text, std::regex(mask.text), mask.word);
  }
  std::vector<std::string> lines;
  std::istringstream in(outcome.text);
  for (std::string line; std::getline(in, line);) lines.push_back(line);
  if (!outcome.text.empty() && outcome.text.back() != '\n') lines.push_back("[no end of line]");
  if (outcome.status != 0) lines.push_back("[exit " + std::to_string(outcome.status) + "]");
  return lines;
}

void write_file(const fs::path& path, const std::vector<std::string>& lines) {
  std::ofstream out(path, std::ios::binary);
  for (const auto& line : lines) out << line << '\n';
  if (!out) throw std::runtime_error("cannot write " + path.string());
}

/// The script with the bodies of its commands replaced.
std::string renewed(const Script& script, const std::vector<std::vector<std::string>>& outputs) {
  std::string text;
  std::size_t at = 0;
  const auto copy_until = [&](std::size_t end) {
    while (at < end) text += script.lines[at++] + "\n";
  };
  for (std::size_t i = 0; i < script.steps.size(); ++i) {
    const Step& step = script.steps[i];
    if (step.kind != StepKind::command) continue;
    copy_until(step.body_from);
    for (const auto& line : outputs[i]) text += scripts::escaped(line) + "\n";
    at = step.body_until;
  }
  copy_until(script.lines.size());
  return text;
}

/// Runs one script; true where all its output is as expected (or was renewed).
bool run_script(const std::string& file, const Options& options) {
  const Script script = scripts::parse(read_whole(file));
  const OwnFolder folder;
  std::vector<Step> masks;
  std::vector<std::vector<std::string>> outputs(script.steps.size());
  std::size_t wrong = 0, commands = 0;
  for (std::size_t i = 0; i < script.steps.size(); ++i) {
    const Step& step = script.steps[i];
    if (step.kind == StepKind::mask) {
      masks.push_back(step);
    } else if (step.kind == StepKind::file) {
      write_file(folder.path() / step.text, step.expected);
    } else {
      ++commands;
      outputs[i] = as_lines(run(step.text, folder.path(), options.path), folder.path(), masks);
      if (outputs[i] == step.expected) continue;
      ++wrong;
      if (options.renew) continue;
      std::printf("%s:%zu: other output than expected (- expected, + printed)\n%s\n%s\n", file.c_str(),
                  step.line, step.text.c_str(), scripts::difference(step.expected, outputs[i]).c_str());
    }
  }
  if (commands == 0) throw std::runtime_error("it has no command");
  if (wrong > 0 && options.renew) {
    std::ofstream(file, std::ios::binary) << renewed(script, outputs);
    std::printf("%s: renewed %zu of %zu outputs\n", file.c_str(), wrong, commands);
    return true;
  }
  std::printf("%s: %zu of %zu commands as expected\n", file.c_str(), commands - wrong, commands);
  return wrong == 0;
}

Options parse_options(int argc, char** argv) {
  Options options;
  const char* renew = std::getenv("SCOURBOOK_RENEW");
  options.renew = renew != nullptr && std::string(renew) == "1";
  for (int i = 1; i < argc; ++i) {
    const std::string word = argv[i];
    if (word == "--renew") {
      options.renew = true;
    } else if (word == "--bin" && i + 1 < argc) {
      options.path = fs::absolute(argv[++i]).string() + ":" + options.path;
    } else {
      options.files.push_back(word);
    }
  }
  return options;
}

}  // namespace

int main(int argc, char** argv) {
  const Options options = parse_options(argc, argv);
  if (options.files.empty()) {
    std::fputs("usage: run_scripts [--renew] [--bin FOLDER]... SCRIPT...\n", stderr);
    return 2;
  }
  int status = 0;
  for (const auto& file : options.files) {
    try {
      if (!run_script(file, options)) status = std::max(status, 1);
    } catch (const std::exception& failure) {
      std::fflush(stdout);
      std::fprintf(stderr, "%s: %s\n", file.c_str(), failure.what());
      status = 2;
    }
  }
  return status;
}
