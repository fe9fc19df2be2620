// Poles of a biquad section, z^2 + a1 z + a2 = 0, of a comb, z^D + feedback = 0, and of a recursion.
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

/// All poles lie strictly inside the unit circle, by the step-down recursion of Schur (1917) and Cohn (1922) on the
/// coefficients as they are, in some 104 bits: wrong only for poles that are nearer to the circle than 1e-16 or so.
bool is_stable(const Recursion& recursion);

/// The largest pole radius, by bisection: the radius to which the plane must shrink for the above to hold. To 1e-12,
/// or what 104 bits leave of it where poles lie close together. 0 where nothing is fed back.
double pole_radius(const Recursion& recursion);

}  // namespace halflsb
