#pragma once
// What a person must be told of a fitted curve, in words. Each appends to curve.remarks; the loud ones go
// first.

#include "rating/gauging_fit.hpp"
#include "terms/curve.hpp"

namespace scourbook::rederivation {

/// Trims that moved by over 3 sds of what was known of them, and area exponents at their lower bound.
void remark_trims(RatingCurve& curve, const rating::Prior& prior);
/// Controls that never govern or never add between cease-to-flow and `top_m`; a takeover that there is not.
void remark_governing(RatingCurve& curve, double top_m);
/// Loud: a new channel bed above a carried crest.
void remark_buried_crest(RatingCurve& curve);

}  // namespace scourbook::rederivation
