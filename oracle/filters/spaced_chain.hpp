// Chains that respond at every g-th sample alone, such as a comb: their impulse response without the zeros between.
//
// Sums over h are the same, for a g-th of the work: a comb of 1000 samples with feedback 0.999 rings for 27 million.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

struct SpacedChain {
    FilterChain chain;  ///< its h[k] is h[k spacing] of the original, whose other samples are 0
    int spacing = 1;
};

/// Chains of combs and gains (a fir of one tap) whose delays have a common divisor; any other is itself, with spacing
/// 1. Of a chain at rest.
SpacedChain without_spacing(const FilterChain& chain);

}  // namespace halflsb
