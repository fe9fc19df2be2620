// What the firmware promises of one stage's arithmetic: the words of [arithmetic] and [filter.arithmetic].
//
// What they mean, to the bit, is written in docs/arithmetic.md; oracle/arithmetic/described.hpp fills in what is left
// out and refuses what cannot be. Here they are as the plan says them.
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

/// In what the stage computes.
enum class NumberKind { integer, float32 };
std::string_view name_of(NumberKind number);

/// How the stage is wired. Which ones a kind of filter has: docs/arithmetic.md.
enum class Structure { direct_1, direct_2, transposed_2, running_sum, fresh_sum, difference, leak };
std::string_view name_of(Structure structure);

/// Where a result is shortened.
enum class RoundingAt {
    sum,      ///< each sum of products once
    product,  ///< each product before it is added
    output,   ///< between the sections of a cascade not at all: only its last section
};
std::string_view name_of(RoundingAt place);

/// How a moving average divides by its points.
enum class Division { divide, shift, reciprocal };
std::string_view name_of(Division division);

/// In which order products of a long sum are added.
enum class Summation { newest_first, oldest_first };
std::string_view name_of(Summation order);

enum class FeedbackCoefficients {
    added,      ///< -a1 and -a2 are stored, and their products added
    subtracted  ///< a1 and a2 are stored, and their products subtracted
};
std::string_view name_of(FeedbackCoefficients sign);

struct StageArithmetic {
    /// Each coefficient is stored as a multiple of 2^-this, rounded by coefficient_rounding.
    std::optional<int> coefficient_fraction_bits = {};
    std::optional<int> accumulator_bits = {};  ///< 8 .. 64
    std::optional<Rounding> rounding = {};     ///< of every result of the stage that is shortened
    Overflow output_overflow = Overflow::saturate;
    /// Words between this stage and the next, where the stage overflows; none: wide enough for anything. Of the
    /// last stage that a channel passes it is the signal's output format, whatever stands here.
    std::optional<SampleFormat> stage_format = {};

    std::optional<NumberKind> number = {};
    std::optional<Structure> structure = {};
    std::optional<RoundingAt> rounding_at = {};
    std::optional<Rounding> output_rounding = {};  ///< of state words to output words; that of `rounding` otherwise
    std::optional<bool> fraction_saving = {};      ///< what a rounding drops goes into the next sum
    std::optional<int> coefficient_bits = {};      ///< 8 .. 64, sign included
    Rounding coefficient_rounding = Rounding::half_away;
    std::optional<FeedbackCoefficients> feedback_coefficients = {};
    std::optional<int> accumulator_fraction_bits = {};  ///< as multiples of 2^-this in values of the input
    std::optional<Overflow> accumulator_overflow = {};
    std::optional<int> state_bits = {};  ///< of what is kept from sample to sample, beside inputs
    std::optional<int> state_fraction_bits = {};
    std::optional<Overflow> state_overflow = {};
    /// Of a CIC decimator, one for each integrator, then each comb: low bits of the input's LSB and up that the
    /// register no longer has, all that came before it counted in (Hogenauer 1981, B_1 .. B_2N). Empty: none.
    std::vector<int> discarded_bits = {};
    std::optional<Division> division = {};
    std::optional<bool> fused_multiply_add = {};
    std::optional<Summation> summation = {};

    bool operator==(const StageArithmetic&) const = default;
};

/// The words, for the reader, its messages and the reference in docs.
const Recipe& arithmetic_recipe();

/// `values` over `defaults`: what the stage's own table says, and [arithmetic] for the rest. Refused is a value that
/// does not fit the table, and what cannot be together: an accumulator narrower than the words that it fills, a
/// float that wraps. An Error's place is the parameter to blame, one that `values` gives.
Outcome<StageArithmetic> make_arithmetic(const ParameterValues& values, const StageArithmetic& defaults = {});

}  // namespace halflsb
