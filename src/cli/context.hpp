#pragma once
// What commands share: their common options, and how their words become times, states and records.

#include <CLI/CLI.hpp>
#include <nlohmann/json.hpp>

#include <memory>
#include <optional>
#include <stdexcept>
#include <string>
#include <vector>

#include "history/state.hpp"
#include "store/book.hpp"
#include "terms/calendar.hpp"

namespace scourbook::cli {

using Json = nlohmann::ordered_json;

/// Arguments that make no sense: exit status 2.
class UsageError : public std::runtime_error {
 public:
  using std::runtime_error::runtime_error;
};

/// Status with which a command ends after it said what there is to say.
enum class Exit { done = 0, refused = 1, bad_input = 2, damaged = 3 };

/// Options of one command, filled by the parser before the command runs.
struct Arguments {
  std::string command_line;  ///< as typed, for the ledger
  std::string book;
  std::string station;
  bool json = false;
  bool utc = false;
  std::string by;
  std::string reason;
  std::string known_at;
  std::optional<int> edition;
  std::optional<std::int64_t> data_version;

  /// Throws UsageError where nobody is named.
  [[nodiscard]] store::ActHead head() const;
};
using SharedArguments = std::shared_ptr<Arguments>;

void add_book(CLI::App& command, Arguments& arguments);
void add_station(CLI::App& command, Arguments& arguments);
void add_json(CLI::App& command, Arguments& arguments);
void add_utc(CLI::App& command, Arguments& arguments);
void add_writer(CLI::App& command, Arguments& arguments, const std::string& reason_help);
/// --known-at alone.
void add_known_at(CLI::App& command, Arguments& arguments);
/// --known-at, --edition and --data.
void add_view(CLI::App& command, Arguments& arguments);

/// Throws StoreError refused, with the stations that there are, where it is unknown.
[[nodiscard]] Station station_of(const store::Book& book, const Arguments& arguments, Known known = {});
/// The offset in which times are shown: the station's, or UTC where asked.
[[nodiscard]] UtcOffset shown_offset(const Station& station, const Arguments& arguments);
/// Throws UsageError that names `option`.
[[nodiscard]] Instant time_of(const std::string& text, UtcOffset offset, const std::string& option);
/// Acts that --known-at lets be seen; `offset` is that of times without one.
[[nodiscard]] Known known_of(const store::Book& book, const Arguments& arguments, UtcOffset offset);
[[nodiscard]] history::View view_of(const store::Book& book, const Arguments& arguments,
                                    const Station& station);
/// Throws UsageError where an option that changes history lacks its reason.
void require_reason(const Arguments& arguments, const std::string& what);

/// Ends in a newline; NaN cannot occur.
void print(const Json& json);
void print(const std::string& text);

/// The three that every reading command tells: {"edition": 2, "data_version": 6, "method_version": 1,
/// "known_at_act": 9}.
[[nodiscard]] Json state_json(const store::Book& book, const history::View& view);
[[nodiscard]] std::string state_line(const store::Book& book, const history::View& view);

}  // namespace scourbook::cli
