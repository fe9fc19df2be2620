// How far the coefficients of a section, being doubles, let its response stray from the design. Private to this room.
#pragma once

#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// The largest relative error of a gain that a design may have: half a step of a 24-bit word. Beyond it, the filter
/// is one that second-order sections in double precision do not hold, and is refused.
inline constexpr double most_loss = 0x1p-24;

/// At least the relative error of the response, at any frequency, that rounding a1 and a2 of each section can make (to
/// first order): the sum over the sections of (half an ulp of a1 + half an ulp of a2) / min |A(e^jw)|. Infinite where
/// a section is not stable. Rounding of b can add as much again where its zeros lie near to the poles.
double loss_of(const std::vector<BiquadSection>& sections);

}  // namespace halflsb
