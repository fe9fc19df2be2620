// What a firmware's author may have decided otherwise: one decision about the arithmetic at a time.
#pragma once

#include <string>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

struct ArithmeticChange {
    std::string name;  ///< "floor in place of half-up"
    std::size_t stage = 0;
    StageArithmetic arithmetic;  ///< of that stage, in place of the declared one
};

/// For every stage: each other rounding, rounding at each product, a narrower accumulator, the other overflow of the
/// output and of the accumulator, feedback before the output's overflow, a fraction saved or not, coefficients cut
/// off instead of rounded, registers of a CIC that discard nothing, another structure, fused multiply-adds, the other
/// order of summation. Left out is what cannot be described and what the stage has no use for. Names say what the
/// change is, never that it is one.
std::vector<ArithmeticChange> plausible_changes(const FilterChain& chain, const SampleFormat& input,
                                                const SampleFormat& output, double output_per_input);

}  // namespace halflsb
