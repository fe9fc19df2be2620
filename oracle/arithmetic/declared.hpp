// The declared reference: the design with what the firmware promised of its arithmetic.
//
// Used: quantised coefficients, the stored reciprocal of a moving average among them; where a stage has a stage_format,
// its output saturates or wraps at the ends of those words on the way to the next stage; the last stage does so at the
// ends of the signal's output format. Values are not rounded to codes. A loop of first order (a one-pole, a DC blocker,
// a comb, a section without a2, in direct form I) whose state saturates feeds back its clipped value, so that no error
// can grow at that rail; other loops feed back what they have before it, and from their first clipped sample on a
// firmware that clips there returns something else (rail_watch.hpp).
#pragma once

#include <memory>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// The chain with each stage's coefficients rounded, half away from zero, to multiples of
/// 2^-coefficient_fraction_bits; stages that declare none are unchanged.
FilterChain declared_chain(const FilterChain& design);

/// Of one channel's chain. Values are held within the ends of each stage's words, or wrapped, as they are described,
/// and scaled by `gain` (output_per_input of the plan, 1 when there is none) behind the last ones. f32 saturates at its
/// largest numbers.
std::unique_ptr<Filter> make_declared_filter(const DescribedChain& chain, double gain);

}  // namespace halflsb
