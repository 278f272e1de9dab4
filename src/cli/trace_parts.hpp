#pragma once
// Parts that the chain behind an instant and behind a day have in common.

#include <string>
#include <vector>

#include "cli/context.hpp"
#include "publish/trace.hpp"

namespace scourbook::cli {

/// The figure as published, and whether computing it again gives the same; empty where it is not published.
struct PublishedFigure {
  std::optional<int> publication;
  std::int64_t act = 0;
  std::optional<int> replay;
  std::optional<std::int64_t> units, recomputed;
  int decimals = 3;
  std::int64_t digits = 3;
};
template <class Traced>
[[nodiscard]] PublishedFigure published_of(const Traced& traced) {
  return {traced.publication,      traced.publication_act, traced.replay, traced.published_units,
          traced.recomputed_units, traced.decimals,        traced.digits};
}

[[nodiscard]] std::string figure_text(const PublishedFigure& figure);
[[nodiscard]] Json figure_json(const PublishedFigure& figure);
/// The arithmetic alone: the flow of each control at the level.
[[nodiscard]] std::string traced_flow_text(const publish::TracedCurve& traced);
[[nodiscard]] std::string traced_curve_text(const publish::TracedCurve& traced, bool with_flow);
[[nodiscard]] Json traced_curve_json(const publish::TracedCurve& traced, bool with_flow);
[[nodiscard]] std::string acts_text(const std::vector<Act>& acts, UtcOffset offset);
[[nodiscard]] Json acts_json(const std::vector<Act>& acts, UtcOffset offset);

}  // namespace scourbook::cli
