// What the firmware promises of one stage's arithmetic: the words of [arithmetic] and [filter.arithmetic].
//
// The declared reference (oracle/arithmetic/declared.hpp) uses coefficient_fraction_bits, output_overflow and
// stage_format; accumulator_bits and rounding are kept for the record alone.
#pragma once

#include <optional>
#include <string_view>
#include <vector>

#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"
#include "stimuli/rounding.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

enum class Overflow { saturate, wrap };
std::string_view name_of(Overflow overflow);

struct StageArithmetic {
    /// Each coefficient is stored as a multiple of 2^-this, rounded half away from zero.
    std::optional<int> coefficient_fraction_bits = {};
    std::optional<int> accumulator_bits = {};  ///< 8 .. 64
    std::optional<Rounding> rounding = {};     ///< of the stage's result to its output words
    Overflow output_overflow = Overflow::saturate;
    /// Words between this stage and the next, where the stage overflows; none: wide enough for anything. Of the
    /// last stage that a channel passes it is the signal's output format, whatever stands here.
    std::optional<SampleFormat> stage_format = {};
};

/// The words, for the reader, its messages and the reference in docs.
const Recipe& arithmetic_recipe();

/// `values` over `defaults`: what the stage's own table says, and [arithmetic] for the rest. Refused is a value that
/// does not fit the table, and what cannot be together: an accumulator narrower than the words that it fills, a
/// float that wraps. An Error's place is the parameter to blame, one that `values` gives.
Outcome<StageArithmetic> make_arithmetic(const ParameterValues& values, const StageArithmetic& defaults = {});

}  // namespace halflsb
