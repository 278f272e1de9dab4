#include "script.hpp"

#include <algorithm>
#include <regex>
#include <sstream>
#include <stdexcept>

namespace scripts {
namespace {

constexpr const char* kRule = "----";

[[noreturn]] void refuse(std::size_t line, const std::string& what) {
  throw std::runtime_error("line " + std::to_string(line + 1) + ": " + what);
}

bool begins(const std::string& line, const std::string& with) {
  return line.rfind(with, 0) == 0;
}

/// "mask REGEX WORD": the word is the last, the expression all before it.
Step parse_mask(const std::string& line, std::size_t number) {
  Step step;
  step.kind = StepKind::mask;
  step.line = number + 1;
  const auto space = line.rfind(' ');
  if (space <= 5) refuse(number, "a mask is: mask REGEX WORD");
  step.text = line.substr(5, space - 5);
  step.word = line.substr(space + 1);
  try {
    const std::regex check(step.text);
  } catch (const std::regex_error& error) {
    refuse(number, "no regular expression: " + step.text + " (" + error.what() + ")");
  }
  return step;
}

/// The step that begins at line `at`; moves `at` behind its body.
Step parse_step(const std::vector<std::string>& lines, std::size_t& at) {
  Step step;
  step.line = at + 1;
  while (at < lines.size() && lines[at] != kRule) {
    if (lines[at].empty()) refuse(at, "a command is followed by a line ----");
    step.text += (step.text.empty() ? "" : "\n") + lines[at++];
  }
  if (at == lines.size()) refuse(at - 1, "a command is followed by a line ----");
  step.body_from = ++at;
  while (at < lines.size() && !lines[at].empty()) step.expected.push_back(unescaped(lines[at++]));
  step.body_until = at;
  if (begins(step.text, "file ")) {
    step.kind = StepKind::file;
    step.text = step.text.substr(5);
    if (step.text.find_first_of("\n/ ") != std::string::npos) refuse(step.line - 1, "a file is: file NAME");
  }
  return step;
}

}  // namespace

std::string escaped(const std::string& line) {
  return line.empty() || line[0] == '\\' ? "\\" + line : line;
}

std::string unescaped(const std::string& line) {
  return begins(line, "\\") ? line.substr(1) : line;
}

Script parse(const std::string& text) {
  Script script;
  std::istringstream in(text);
  for (std::string line; std::getline(in, line);) script.lines.push_back(line);
  for (std::size_t at = 0; at < script.lines.size();) {
    const std::string& line = script.lines[at];
    if (line.empty() || line[0] == '#') {
      ++at;
    } else if (begins(line, "mask ")) {
      script.steps.push_back(parse_mask(line, at++));
    } else if (line == kRule) {
      refuse(at, "---- without a command above it");
    } else {
      script.steps.push_back(parse_step(script.lines, at));
    }
  }
  return script;
}

std::string difference(const std::vector<std::string>& expected, const std::vector<std::string>& actual) {
  // Longest common subsequence, from the ends back.
  const std::size_t n = expected.size(), m = actual.size();
  std::vector<std::vector<std::size_t>> common(n + 1, std::vector<std::size_t>(m + 1));
  for (std::size_t i = n; i-- > 0;) {
    for (std::size_t j = m; j-- > 0;) {
      common[i][j] =
          expected[i] == actual[j] ? common[i + 1][j + 1] + 1 : std::max(common[i + 1][j], common[i][j + 1]);
    }
  }
  std::string text;
  std::size_t i = 0, j = 0;
  while (i < n || j < m) {
    if (i < n && j < m && expected[i] == actual[j]) {
      text += "  " + expected[i] + "\n";
      ++i, ++j;
    } else if (i < n && (j == m || common[i + 1][j] >= common[i][j + 1])) {
      text += "- " + expected[i++] + "\n";
    } else {
      text += "+ " + actual[j++] + "\n";
    }
  }
  return text;
}

}  // namespace scripts
