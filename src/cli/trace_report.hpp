#pragma once
// The chain behind a flow as people and programs read it.

#include <string>

#include "cli/context.hpp"
#include "publish/trace.hpp"

namespace scourbook::cli {

[[nodiscard]] std::string trace_text(const store::Book& book, const publish::TracedValue& traced,
                                     UtcOffset offset);
[[nodiscard]] std::string trace_text(const store::Book& book, const publish::TracedDay& traced,
                                     UtcOffset offset);
[[nodiscard]] Json trace_json(const store::Book& book, const publish::TracedValue& traced, UtcOffset offset);
[[nodiscard]] Json trace_json(const store::Book& book, const publish::TracedDay& traced, UtcOffset offset);

}  // namespace scourbook::cli
