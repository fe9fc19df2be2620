// The declared reference: the design with what the firmware promised of its arithmetic. In this
// form: quantised coefficients, and an output that saturates at the rails of its format.
#pragma once

#include <memory>

#include "oracle/filters/filter.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// The chain with each stage's coefficients rounded, half away from zero, to multiples of
/// 2^-coefficient_fraction_bits; stages that declare none are unchanged.
FilterChain declared_chain(const FilterChain& design);

/// A filter of the declared chain whose output is clamped to lowest_value .. highest_value of
/// `output`, after scaling by `gain` (output_per_input of the plan, 1 when there is none).
std::unique_ptr<Filter> make_declared_filter(const FilterChain& design, const SampleFormat& output, double gain);

}  // namespace halflsb
