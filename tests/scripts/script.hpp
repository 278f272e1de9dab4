#pragma once
// A script test: commands and the text that they must print.
//
//   # A comment, above the step that it explains.
//   scourbook new demo.scourbook
//   ----
//   made demo.scourbook
//
// A step is a command (one or more lines, given to /bin/sh), a line "----", and the expected output up to a
// blank line. Output is what the command writes to both streams, in its order; an exit status other than 0 is
// a last line
// "[exit 2]". An empty line of output is written as "\", and a line that begins with "\" gets one more in
// front.
//
//   file NAME            writes a small file: its text follows after "----", up to a blank line
//   mask REGEX WORD      from here on, what the regular expression (ECMAScript) matches is shown as WORD; an
//   own
//                        line without "----"
//
// Commands run in a folder of their own per script, with HOME there, TZ=UTC0 and LC_ALL=C.UTF-8; its path
// shows as $FOLDER.

#include <cstddef>
#include <string>
#include <vector>

namespace scripts {

enum class StepKind { command, file, mask };

struct Step {
  StepKind kind = StepKind::command;
  std::size_t line = 0;               ///< of its first line, from 1
  std::string text;                   ///< the command, the file's name, or the mask's regular expression
  std::string word;                   ///< of a mask
  std::vector<std::string> expected;  ///< output, or the file's text, unescaped
  std::size_t body_from = 0,
              body_until = 0;  ///< lines of the body in Script::lines, from 0, the end excluded
};

struct Script {
  std::vector<std::string> lines;
  std::vector<Step> steps;
};

/// Throws std::runtime_error "line N: ..." where the text is no script.
[[nodiscard]] Script parse(const std::string& text);

/// A line of output as it stands in a script, and back.
[[nodiscard]] std::string escaped(const std::string& line);
[[nodiscard]] std::string unescaped(const std::string& line);

/// The lines that both texts share keep a space in front; those of `expected` only get "- ", of `actual` only
/// "+ ".
[[nodiscard]] std::string difference(const std::vector<std::string>& expected,
                                     const std::vector<std::string>& actual);

}  // namespace scripts
