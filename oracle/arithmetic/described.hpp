// The arithmetic of a chain with everything said: what docs/arithmetic.md gives where the plan is silent, and the
// refusal of what cannot be. Twins compute by it, limits are derived from it.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// Of a word that nobody limited: as wide as it takes.
inline constexpr int wide_bits = 128;

/// Two's complement: the number X stands for X 2^-fraction_bits, a value of the chain's input.
struct Word {
    int bits = wide_bits;
    int fraction_bits = 0;  ///< may be negative: output_per_input below 1
    Overflow overflow = Overflow::wrap;
    bool operator==(const Word&) const = default;
};

/// -2^(bits - 1) and 2^(bits - 1) - 1, and one step, as values.
double lowest_value(const Word& word);
double highest_value(const Word& word);
double step_of(const Word& word);

/// What is between two stages, or at an end of the chain.
struct Port {
    Word word;                   ///< of f32: meaningless
    bool is_float = false;       ///< f32
    std::int64_t zero_code = 0;  ///< subtracted from what comes in, added to what goes out: the mid-code of u formats
};

struct DescribedStage {
    FilterStage stage;  ///< with its coefficients as designed
    Port in, out;
    NumberKind number = NumberKind::integer;
    Structure structure = Structure::direct_1;
    RoundingAt rounding_at = RoundingAt::sum;
    bool fraction_saving = false;

    // Of integer stages:
    int coefficient_fraction_bits = 0;
    FeedbackCoefficients feedback_coefficients = FeedbackCoefficients::added;
    int accumulator_bits = wide_bits;
    Overflow accumulator_overflow = Overflow::wrap;
    /// None: as many as the terms of each sum have, or as rounding_at says.
    std::optional<int> accumulator_fraction_bits;
    Word state;  ///< unused where the stage keeps only inputs; of transposed-2: bits and fraction as resolved
    std::vector<int> discarded_bits;  ///< of a CIC decimator's registers (cic_registers.hpp); empty: none
    Division division = Division::divide;
    Summation summation = Summation::newest_first;
    /// Said by no plan, for whoever wants to know what a firmware does that computes so: eighths of the last place that
    /// a sum is shortened to, added to each sum before; and what a moving average divides by, in place of its points.
    int sum_constant_eighths = 0;
    std::optional<int> divisor;

    // Of float32 stages:
    bool fused = false;

    Rounding rounding = Rounding::floor, output_rounding = Rounding::floor;
    /// The plan said so. Twins need all three; limits that do not know the rounding take any from floor to half-up.
    bool rounding_is_said = false;
    bool words_are_said = true;         ///< of every stage but the last
    bool coefficients_are_said = true;  ///< how finely they are stored
};

/// Fraction bits of the accumulator of a sum whose terms have at most `terms` and which goes to words with `target`.
int accumulator_fraction_bits_of(const DescribedStage& stage, int terms, int target);

/// Coefficients as stored integers, C = c 2^f rounded: of an FIR its taps, of a section b0 b1 b2 and then those of
/// the feedback with the sign in which they are stored; docs/arithmetic.md.
std::int64_t stored_coefficient(const DescribedStage& stage, double coefficient);

/// What a problem is about: which stage, and its Error's place is the word to blame.
struct ArithmeticProblem {
    std::size_t stage = 0;
    Error error;
};

struct DescribedChain {
    std::vector<DescribedStage> stages;
    /// Why no twin can be made of it (rounding not said, words between stages not said); none: it can.
    std::optional<ArithmeticProblem> missing;
    /// Where output_per_input is no power of two the last words have no binary point in values of the input and are as
    /// wide as it takes; what is held is the value of the output, within these.
    struct Ends {
        double lowest, highest;
    };
    std::optional<Ends> output_ends = {};
};

/// `chain` is that of one channel. Refuses contradictory arithmetic, coefficients outside their word, an accumulator
/// that cannot hold one product. Words that a kind of filter has no use for are ignored: they may stand in
/// [arithmetic] for another stage; of a stage's own words the reader asks misplaced_word(). A chain without stages is
/// described as a fir of the one tap 1.
struct DescribedOrProblem {
    std::optional<DescribedChain> described;
    std::optional<ArithmeticProblem> problem;
};
DescribedOrProblem describe(const FilterChain& chain, const SampleFormat& input, const SampleFormat& output,
                            double output_per_input);

/// Whether a stage of that kind has the word of [arithmetic].
bool has_word(const FilterStage& stage, std::string_view word);
/// The first word of a stage's own [filter.arithmetic] that its kind of filter has no use for.
std::optional<Error> misplaced_word(const FilterStage& stage, const ParameterValues& own);

}  // namespace halflsb
