#pragma once
// A survey, what the reach rows say, the parent curve and a few gaugings -> a proposed curve with the fate of
// every coefficient. Pure: no store, no clock, no files.

#include <optional>
#include <string>
#include <vector>

#include "terms/curve.hpp"
#include "terms/provenance.hpp"

namespace scourbook::rederivation {

/// A gauging with the level that its stage had under the gauge zero (and stage correction) of its time.
struct GaugingAtLevel {
  Gauging gauging;
  int version = 1;
  double level_m = 0;
};

/// One control's reach row in force at the start of the derivation, with its identity in the book.
struct ReachInput {
  ReachRow row;
  PinnedReach id;
};

/// The curve that a new one descends from, with what it was made of.
struct Parent {
  RatingCurve curve;
  std::vector<ReachInput> reach;  ///< the rows it used, in the order of its controls
  std::optional<Survey> survey;   ///< its survey, for marks on fixed ground and the law of carried controls
};

struct Options {
  HoldPolicy hold = HoldPolicy::velocity_scale;
  std::vector<std::string> carry;      ///< control names that may keep the parent's survey
  std::vector<std::string> leave_out;  ///< gauging ids
  bool without_gaugings = false;
  bool rescale = false;
};

struct Input {
  std::string station;
  Survey survey;
  int survey_version = 1;
  std::vector<ReachInput> reach;         ///< rows in force at `from`, one per control
  std::optional<Parent> parent;          ///< none: a first curve
  std::vector<GaugingAtLevel> gaugings;  ///< those whose middle lies in the period, by time
  Instant from{};
  std::optional<Instant> until;
  Options options;
};

enum class Status {
  not_run,
  ok,      ///< a proposal; its diagnostics may still have failed tests
  refused  ///< `refusals` say why, in words, and what to do
};

struct Result {
  Status status = Status::not_run;
  std::vector<std::string> refusals;
  RatingCurve curve;  ///< number 0; ready to be stored
  /// The parent's coefficients beside it, by control of `curve` (none where the control is new).
  std::vector<std::optional<ControlCoefficients>> before;
};

[[nodiscard]] Result derive(const Input& input);

}  // namespace scourbook::rederivation
