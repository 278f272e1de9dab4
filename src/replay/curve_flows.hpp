#pragma once
// Many levels through one curve: the inner loop of a replay. Arrays in, arrays out; no dates, no periods.

#include <cstdint>
#include <span>
#include <vector>

#include "store/book.hpp"
#include "terms/curve.hpp"
#include "terms/quality.hpp"

namespace scourbook::replay {

/// Columns of equal length that flows are written to.
struct FlowSpans {
  std::span<double> discharge_m3s;
  std::span<double> sd_ln_q;
  std::span<Flags> flags;
  std::span<Quality> quality;
  std::span<std::int8_t> control;

  [[nodiscard]] FlowSpans part(std::size_t begin, std::size_t count) const;
};

/// Columns of their own.
struct FlowColumns {
  explicit FlowColumns(std::size_t count);
  [[nodiscard]] FlowSpans spans();

  std::vector<double> discharge_m3s;  ///< begins as quiet NaN
  std::vector<double> sd_ln_q;
  std::vector<Flags> flags;          ///< begins as gap
  std::vector<Quality> quality;      ///< begins as missing
  std::vector<std::int8_t> control;  ///< begins as -1
};

/// Flow, governing control and sd of ln Q at each level, m, with flags and quality by the curve's limits (the
/// quality of the reading is not in them: at best unchecked). A NaN level leaves its place as it was.
void curve_flows(const RatingCurve& curve, const store::Settings& settings, std::span<const double> level_m,
                 const FlowSpans& out);

/// Passage from `outgoing` into `flows`, which holds the incoming curve's values: Q = (1 - x) Q_out + x Q_in
/// with x = weight[i]; the sds weighted by these flows (0 where there is no flow); flags of both, and
/// blended; the control of the incoming.
void blend_flows(std::span<const double> weight, const FlowSpans& outgoing, const FlowSpans& flows);

}  // namespace scourbook::replay
