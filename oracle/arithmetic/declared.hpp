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
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// The chain with each stage's coefficients rounded, half away from zero, to multiples of
/// 2^-coefficient_fraction_bits; stages that declare none are unchanged.
FilterChain declared_chain(const FilterChain& design);

/// A filter of the declared chain of one channel (chain_of_channel). A stage_format is in values of the chain's
/// input; after the last stage values are scaled by `gain` (output_per_input of the plan, 1 when there is none),
/// then held within lowest_value .. highest_value of `output`, or wrapped into -full scale .. full scale, by the
/// last stage's output_overflow (a chain without stages saturates). f32 saturates at its largest numbers.
/// No state is clipped: nothing is known of the words of states here.
std::unique_ptr<Filter> make_declared_filter(const FilterChain& design, const SampleFormat& output, double gain);

/// Of a whole description, whose words stand in it. Values are scaled by `gain` (output_per_input) behind the last
/// words. f32 saturates at its largest numbers.
std::unique_ptr<Filter> make_declared_filter(const DescribedChain& chain, double gain);

}  // namespace halflsb
