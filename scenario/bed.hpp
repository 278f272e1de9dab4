#pragma once
// The real river bed and its true stage-discharge relation. The bed is known every 0.2 m, finer than any
// survey, and flow is summed strip by strip with a roughness that depends on depth: not the equation that the
// program fits.

#include <cstdint>
#include <vector>

namespace scenario {

struct BedPoint {
  double distance_m = 0;
  double elevation_m = 0;
  bool floodplain = false;  ///< the strip from here to the next point
};
using Bed = std::vector<BedPoint>;

/// A bed through `corners`, a point every 0.2 m, with bed forms of `roughness_m` (one sd, correlated over
/// about a metre) where it lies below `forms_below_m`. Corners keep their elevation.
[[nodiscard]] Bed make_bed(const std::vector<BedPoint>& corners, double roughness_m, double forms_below_m,
                           std::uint64_t seed);

/// What a flood did: the bed below `below_m` rises by `rise_m` (negative: scour), more on one side of the
/// channel than on the other (`skew` -1 to 1), nothing at the banks; small bed forms are made anew.
struct Change {
  double rise_m = 0;
  double skew = 0;
  double below_m = 0;
  double forms_m = 0.02;
  std::uint64_t seed = 0;
};
[[nodiscard]] Bed changed(const Bed& bed, const Change& change);

[[nodiscard]] double lowest(const Bed& bed);
/// Bed elevation at a distance, by straight lines.
[[nodiscard]] double elevation_at(const Bed& bed, double distance_m);

struct WetSection {
  double area_m2 = 0;
  double top_width_m = 0;
};
[[nodiscard]] WetSection wet_section(const Bed& bed, double level_m);

/// What the water meets. Manning's n of a strip of depth h is n (1 + 0.3 / (1 + h / 0.25 m)): shallow water
/// is rougher.
struct Resistance {
  double slope = 0;
  double main_n = 0;
  double floodplain_n = 0;
};
/// Sum over strips of area (area / wetted perimeter)^(2/3) / n, times sqrt(slope); m3/s.
[[nodiscard]] double conveyed_flow(const Bed& bed, const Resistance& resistance, double level_m,
                                   bool floodplain);

/// Discharge as a function of level, as a table: exact at each mm, straight between.
class TrueCurve {
 public:
  TrueCurve() = default;
  /// `crest` may be null: no section control. Flow is the smaller of crest and main channel, plus the
  /// floodplain. Over the crest flow is critical: Q = C sqrt(g A^3 / T) at the level y + A / (2 T).
  TrueCurve(const Bed* crest, double crest_coefficient, const Bed& channel, const Resistance& resistance,
            double top_m);
  [[nodiscard]] double flow(double level_m) const;
  /// The level of a flow; the cease-to-flow level for none. Inverse of flow() to 1e-9 m.
  [[nodiscard]] double level(double flow_m3s) const;
  [[nodiscard]] double cease_to_flow_m() const { return from_m_; }
  [[nodiscard]] double top_flow() const { return flows_.back(); }

 private:
  double from_m_ = 0;
  std::vector<double> flows_;
};

}  // namespace scenario
