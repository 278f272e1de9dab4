#pragma once
// The command line: arguments in, text or JSON out, exit status.

namespace scourbook::cli {

/// Runs one command. Exit status: 0 done; 1 asked for something that does not exist or is not allowed; 2 bad
/// input or usage; 3 the book is damaged or from a newer program.
[[nodiscard]] int run(int argc, char** argv);

}  // namespace scourbook::cli
