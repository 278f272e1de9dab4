#pragma once
// Geometry of one part of a surveyed cross-section: area, wetted perimeter and width as functions of level.

#include <string>
#include <vector>

#include "terms/records.hpp"

namespace scourbook::hydraulics {

/// One strip of bed between two neighbouring survey points. Distances in m along the section, elevations in
/// m. Equal distances are a vertical wall.
struct Strip {
  double left_distance_m, left_elevation_m;
  double right_distance_m, right_elevation_m;
};

/// Elements of the wetted section at one level.
struct SectionElements {
  double area_m2 = 0;
  double wetted_perimeter_m = 0;
  double top_width_m = 0;
  /// A / P; 0 where dry.
  [[nodiscard]] double hydraulic_radius_m() const {
    return wetted_perimeter_m > 0 ? area_m2 / wetted_perimeter_m : 0;
  }
};

/// The strips of a cross-section that belong to one part. Interfaces to other parts, and the walls above the
/// two ends, are vertical and frictionless (divided-channel method; Chow 1959, section 6-5, from memory).
/// Vertical walls between two points of the part are bed and count as wetted perimeter.
class SectionPart {
 public:
  /// Takes the strips of `part` in `cross_section` from `points` (in file order). The strip from a point to
  /// the next one belongs to the point's part, "main" where it is blank. Has no strips where there are none.
  SectionPart(const std::vector<SurveyPoint>& points, const std::string& cross_section,
              const std::string& part);
  explicit SectionPart(std::vector<Strip> strips);

  [[nodiscard]] bool empty() const { return strips_.empty(); }
  [[nodiscard]] const std::vector<Strip>& strips() const { return strips_; }
  [[nodiscard]] double lowest_m() const;   ///< lowest elevation of the bed; requires !empty()
  [[nodiscard]] double highest_m() const;  ///< highest elevation of the bed; requires !empty()
  /// The lower of the elevations at the part's two ends: bankfull for a main part. Where other parts lie
  /// between its strips, the ends beside them count too: the level at which water first leaves the part.
  /// Requires !empty().
  [[nodiscard]] double lower_end_m() const;
  /// The distinct elevations of the bed's points, rising: between two of them the area is a square of the
  /// level.
  [[nodiscard]] std::vector<double> elevations_m() const;
  /// Elements at `level_m`; exact for straight bed lines, relative error below 1e-13 of the section's own
  /// scale. A level bed counts only where the water stands above it.
  [[nodiscard]] SectionElements at(double level_m) const;
  /// The same part with every bed elevation below `floor_m` raised to it: what counts above a spill level.
  /// The raised bed counts as wetted perimeter with its horizontal length: the still water below the floor
  /// holds the flow above back as a bed of that length would, which errs towards less flow, by little in a
  /// wide overbank part.
  [[nodiscard]] SectionPart raised_to(double floor_m) const;

 private:
  std::vector<Strip> strips_;
};

}  // namespace scourbook::hydraulics
