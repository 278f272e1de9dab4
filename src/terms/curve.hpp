#pragma once
// A rating curve: coefficients with their fates, uncertainty, what it was made of. Plain data; its evaluation is in rating.

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "terms/records.hpp"

namespace scourbook {

/// What happened to a coefficient when the survey arrived.
enum class Fate { held, recomputed, refitted, carried, rescaled, fresh };
[[nodiscard]] std::string_view word(Fate fate);  ///< "held" ...; fresh reads "new"
[[nodiscard]] std::optional<Fate> parse_fate(std::string_view text);

/// Coefficients of one control. SI throughout; levels in m above the station's datum.
///   Q(z) = flow_scale (z - h0)^exponent, for z > h0, else 0
///   exponent = velocity_exponent + area_exponent;  flow_scale = v1 f delta^-(dc + ec)
struct ControlCoefficients {
  ControlKind kind = ControlKind::channel;
  std::string name;           ///< unique in the curve: "section", "channel", "overbank" or "overbank PART" where there are several
  std::string cross_section;
  std::string part;
  FlowLaw law = FlowLaw::manning;

  // held: what slope, roughness, meandering and calibration say
  double velocity_scale = 0;     ///< v1, m/s at R = 1 m; C_d for a crest
  double velocity_exponent = 0;  ///< b of the flow law
  double allowance_h0_m = 0;     ///< dh
  double allowance_c = 0;        ///< dc
  double reference_depth_m = 1;  ///< delta of the lineage
  int calibrated_in = 0;         ///< number of the curve in which the held scale was estimated; 0 = this one

  // recomputed: what the survey shows
  std::string survey;            ///< the survey these came from (the parent's where carried)
  int survey_version = 1;
  double lowest_point_m = 0;     ///< or the spill level of an overbank control
  double surveyed_h0_m = 0;
  double surveyed_c = 0;
  double area_coefficient = 0;     ///< w, area = w d^c
  double section_coefficient = 0;  ///< f
  double range_from_m = 0;         ///< range of levels over which the law was fitted
  double range_to_m = 0;
  double law_misfit = 0;           ///< largest |area by law / area of section - 1| in the range

  // refitted: trims of this period
  double trim_h0_m = 0;  ///< e_k; the survey's common e_s stands with the curve
  double trim_c = 0;     ///< ec

  // effective, used for flows
  double h0_m = 0;
  double area_exponent = 0;  ///< c, effective
  double exponent = 0;       ///< b + c
  double flow_scale = 0;     ///< A

  Fate scale_fate = Fate::fresh;    ///< of v1
  Fate allowance_fate = Fate::fresh;
  Fate survey_fate = Fate::recomputed;
  Fate trim_fate = Fate::refitted;
};

/// One level of the band table: sd of ln Q, all unknowns and the model error r included.
struct BandPoint {
  double level_m = 0;
  double sd_ln_q = 0;
};

/// How a gauging took part in a derivation. The numbers are stored: never change their meaning.
enum class GaugingUse { used = 0, left_out = 1, weighted_down = 2 };
[[nodiscard]] std::string_view word(GaugingUse use);

struct CurveGauging {
  std::string gauging;
  int version = 1;
  GaugingUse use = GaugingUse::used;
  std::string reason;   ///< why it was left out: "below the offset", "far off", "left out by name"
  std::string role;     ///< "discharge", "zero flow" or "zero-flow level"
  double level_m = 0;   ///< with the gauge zero of the derivation
  double discharge_m3s = 0;
  double curve_m3s = 0;           ///< flow of the fitted curve at that level
  std::optional<double> residual; ///< ln Q_i - ln Q(z_i); none where the curve has no flow or Q_i is zero
  double sd_ln_q = 0;             ///< of the gauging, with r and stage uncertainty
};

/// One diagnostic with its rule and source: what was tested, what came out, and what it means.
struct Diagnostic {
  std::string name;                ///< stable key, ending in its unit where it is a quantity
  std::optional<double> value;
  std::optional<double> limit;     ///< what the value is held against
  std::string verdict;             ///< "passed", "failed", "note" or "not possible"
  std::string text;                ///< the sentence that people read
  std::string rule;                ///< how it is judged
  std::string source;              ///< standard, paper, or "own rule"
};

enum class CurveForm { power, conveyance };
enum class HoldPolicy { velocity_scale, carried, flow_scale };
[[nodiscard]] std::string_view word(CurveForm form);
[[nodiscard]] std::string_view word(HoldPolicy policy);

/// A reach row, survey or gauge-zero state that a curve used, by version: what check --rederive and trace go back to.
struct PinnedReach {
  std::int64_t row = 0;
  int version = 1;
};

/// A curve as derived and stored. Proposed, in force, superseded and out of date are not stored: they follow from editions and inputs.
struct RatingCurve {
  int number = 0;  ///< in its station; rises, never used again; 0 until stored
  std::string station;
  CurveForm form = CurveForm::power;
  HoldPolicy hold = HoldPolicy::velocity_scale;
  int lineage = 0;                ///< number of the first curve of the lineage (itself for a first curve)
  std::optional<int> parent;      ///< curve that it descends from
  std::string survey;
  int survey_version = 1;
  std::vector<PinnedReach> reach;  ///< one per control, in the order of `controls`
  Instant from{};                  ///< range of the derivation (gaugings inside were offered)
  std::optional<Instant> until;

  std::vector<ControlCoefficients> controls;  ///< section, channel, then overbank; at least one
  std::optional<double> takeover_level_m;     ///< from here up the channel governs; none: plain minimum of section and channel
  double survey_level_error_m = 0;            ///< e_s, shared trim of all controls of the new survey
  double model_error = 0.03;                  ///< r, one sd of ln Q

  /// Posterior: names of the unknowns and their covariance, row by row (names.size() squared).
  /// Names: "e_s", then for each control "NAME.ln_v1", "NAME.dh", "NAME.dc", "NAME.e_k", "NAME.ec".
  std::vector<std::string> unknowns;
  std::vector<double> covariance;
  std::vector<BandPoint> bands;  ///< by rising level, at least two

  std::vector<CurveGauging> gaugings;
  std::vector<Diagnostic> diagnostics;
  std::vector<std::string> remarks;  ///< what a person must be told, loud ones first

  // for the flags of a flow
  double surveyed_top_m = 0;                   ///< above it the flow is flagged above-surveyed
  std::optional<double> gauged_low_m3s;        ///< range gauged in this curve, or in its parent where it has none
  std::optional<double> gauged_high_m3s;
  std::optional<double> lineage_high_m3s;      ///< largest flow gauged in the lineage up to here
  bool inferred = false;                       ///< no gauging in the period
  bool carried = false;                        ///< some control keeps the parent's survey
};

}  // namespace scourbook
