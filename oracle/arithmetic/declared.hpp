// The declared reference: the design with what the firmware promised of its arithmetic.
//
// Used: quantised coefficients; where a stage has a stage_format, its output saturates or wraps at the ends of
// those words on the way to the next stage; the last stage does so at the ends of the signal's output format.
// Values are not rounded to codes. What a stage feeds back is its result before that: the state of a firmware that
// feeds back its clipped output differs from the first clipped sample on.
// Not used, in the record alone: accumulator_bits and rounding. Limits that are derived from the arithmetic need
// them; this reference has none of their errors.
#pragma once

#include <memory>

#include "oracle/filters/filter.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// The chain with each stage's coefficients rounded, half away from zero, to multiples of
/// 2^-coefficient_fraction_bits; stages that declare none are unchanged.
FilterChain declared_chain(const FilterChain& design);

/// A filter of the declared chain of one channel (chain_of_channel). A stage_format is in values of the chain's
/// input; after the last stage values are scaled by `gain` (output_per_input of the plan, 1 when there is none),
/// then held within lowest_value .. highest_value of `output`, or wrapped into -full scale .. full scale, by the
/// last stage's output_overflow (a chain without stages saturates). f32 saturates at its largest numbers.
std::unique_ptr<Filter> make_declared_filter(const FilterChain& design, const SampleFormat& output, double gain);

}  // namespace halflsb
