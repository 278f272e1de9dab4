#pragma once
// Flow of a section itself, without any power law: Manning, Chezy, critical flow over a crest, summed
// conveyance.

#include "hydraulics/section.hpp"

namespace scourbook::hydraulics {

/// Manning: Q = A R^(2/3) sqrt(S) / n, SI, m3/s.
[[nodiscard]] double manning_flow(const SectionElements& e, double slope, double roughness_n);
/// Chezy: Q = C A sqrt(R S).
[[nodiscard]] double chezy_flow(const SectionElements& e, double slope, double chezy_c);
/// Flow that is critical with the water surface at `level_m`: sqrt(g A^3 / T); 0 where dry.
[[nodiscard]] double critical_flow_at_surface(const SectionPart& crest, double level_m);
/// Flow over a crest whose energy head stands at `head_level_m`: C_d times the critical flow whose surface
/// plus A / (2 T) equals it (solved by bisection to 1e-12 m, made monotone).
[[nodiscard]] double crest_flow(const SectionPart& crest, double head_level_m, double discharge_coefficient);

}  // namespace scourbook::hydraulics
