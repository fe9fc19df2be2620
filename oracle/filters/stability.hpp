// Poles of a biquad section, z^2 + a1 z + a2 = 0, and of a comb, z^D + feedback = 0.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// Both poles lie strictly inside the unit circle: |a2| < 1 and |a1| < 1 + a2 (the triangle of Jury
/// 1962), decided without rounding error.
bool is_stable(const BiquadSection& section);

/// The larger of the two pole radii.
double pole_radius(const BiquadSection& section);

/// The radius of all poles of a comb, |feedback|^(1/delay_samples); it is stable where |feedback| < 1.
double pole_radius(const Comb& comb);

}  // namespace halflsb
