// Faults on the way into and out of a filter, and of its reset: the same for every filter.
#pragma once

#include <memory>

#include "rigs/virtual-board/code_filter.hpp"
#include "rigs/virtual-board/sample_words.hpp"

namespace halflsb::board {

enum class PassageFault {
    one_sample_late,         ///< S01: the output of the previous call
    reset_clears_half,       ///< S06
    never_reset,             ///< S07: after power-up
    lost_at_block_boundary,  ///< S11
    bypass,                  ///< S20
    bytes_swapped,           ///< N04: at the input
    polarity_inverted,       ///< N06: at the input
    half_buffer_repeated,    ///< D01: each tenth half-buffer of 32 samples is its predecessor
    sample_dropped,          ///< D03: each 1000th never reaches the filter, the output is held
    sample_duplicated,       ///< D04: each 1000th passes the filter twice
    output_held,             ///< while it moves by less than 4 codes a sample
    noise_added,             ///< at the output, uniform over -8 .. 8 codes
    output_drifts,           ///< by a code each 1000 samples
    slow_sample,             ///< each 1000th takes 2 ms more; every code is right
};

/// `format` decides what zero is, where the codes end, and what a swapped or an inverted sample.
std::unique_ptr<CodeFilter> with_fault(PassageFault fault, Format format, std::unique_ptr<CodeFilter> filter);

}  // namespace halflsb::board
