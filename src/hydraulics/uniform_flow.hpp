#pragma once
// Flow of a section itself, without any power law: Manning, Chezy, critical flow over a crest.
// The summed conveyance of a compound section is the sum of these over its parts.

#include "hydraulics/section.hpp"

namespace scourbook::hydraulics {

/// Manning: Q = A R^(2/3) sqrt(S) / n, SI, m3/s.
[[nodiscard]] double manning_flow(const SectionElements& e, double slope, double roughness_n);
/// Chezy: Q = C A sqrt(R S).
[[nodiscard]] double chezy_flow(const SectionElements& e, double slope, double chezy_c);
/// Flow that is critical with the water surface at `level_m`: sqrt(g A^3 / T); 0 where dry.
[[nodiscard]] double critical_flow_at_surface(const SectionPart& crest, double level_m);
/// Flow over a crest whose energy head stands at `head_level_m`: C_d times the critical flow whose surface y
/// plus A / (2 T) equals it. Where several do (the width jumps at a berm), the largest: that is the greatest
/// A(y) sqrt(2 g (head - y)) over all surfaces y (the principle of greatest discharge; Chow 1959, chapter 3,
/// from memory), so that flow never falls as the head rises. Found in closed form between neighbouring bed
/// points.
[[nodiscard]] double crest_flow(const SectionPart& crest, double head_level_m, double discharge_coefficient);

}  // namespace scourbook::hydraulics
