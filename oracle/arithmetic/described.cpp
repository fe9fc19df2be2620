#include "oracle/arithmetic/described.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/arithmetic_checks.hpp"
#include "oracle/arithmetic/family.hpp"
#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

int fraction_bits_of(const SampleFormat& format) { return format.family == FormatFamily::q ? format.fraction_bits : 0; }

Port port_of(const SampleFormat& format, Overflow overflow) {
    Port port;
    port.is_float = !format.has_lsb();
    if (port.is_float) return port;
    port.word = {format.word_bits, fraction_bits_of(format), overflow};
    port.zero_code = zero_code(format);
    return port;
}

/// log2 of a positive power of two.
std::optional<int> exact_log2(double number) {
    int exponent = 0;
    if (std::frexp(number, &exponent) != 0.5) return std::nullopt;
    return exponent - 1;
}

bool has_coefficients(Family family) {
    return family != Family::average && family != Family::median && family != Family::cic;
}

void describe_coefficients(DescribedStage& described) {
    const FilterStage& stage = described.stage;
    const Family family = family_of(stage);
    if (is_by_shift(stage)) {
        described.coefficient_fraction_bits = -*exact_log2(std::get<BiquadCascade>(stage.design).sections.front().b0);
    } else if (stage.coefficient_fraction_bits) {
        described.coefficient_fraction_bits = *stage.coefficient_fraction_bits;
    } else {
        described.coefficients_are_said = !has_coefficients(family);
    }
    described.feedback_coefficients = stage.arithmetic.feedback_coefficients.value_or(FeedbackCoefficients::added);
}

/// The largest number of fraction bits that a term of the sum has which goes to the state (transposed: to the output).
int most_terms(const DescribedStage& described) {
    const int fed_back = described.structure == Structure::transposed_2 ? described.out.word.fraction_bits
                                                                        : described.state.fraction_bits;
    return std::max(described.in.word.fraction_bits, fed_back) + described.coefficient_fraction_bits;
}

void describe_state(DescribedStage& described) {
    const StageArithmetic& said = described.stage.arithmetic;
    const bool is_transposed = described.structure == Structure::transposed_2;
    described.state = described.out.word;
    if (described.out.is_float || is_transposed) described.state.bits = described.accumulator_bits;
    if (is_transposed) {
        described.state.fraction_bits =
            accumulator_fraction_bits_of(described, most_terms(described), described.out.word.fraction_bits);
    }
    const bool is_cic = family_of(described.stage) == Family::cic;
    if (is_cic) described.state = {wide_bits, described.in.word.fraction_bits, Overflow::wrap};
    if (said.state_bits) described.state.bits = *said.state_bits;
    if (said.state_fraction_bits && !is_cic) described.state.fraction_bits = *said.state_fraction_bits;
    if (!is_cic) described.state.overflow = said.output_overflow;
    if (said.state_overflow) described.state.overflow = *said.state_overflow;
}

DescribedStage described_stage(const FilterStage& stage, const Port& in, const Port& out) {
    const StageArithmetic& said = stage.arithmetic;
    DescribedStage described;
    described.stage = stage;
    described.in = in;
    described.out = out;
    described.number = said.number.value_or(in.is_float || out.is_float ? NumberKind::float32 : NumberKind::integer);
    described.structure = structure_of(stage);
    described.fused = said.fused_multiply_add.value_or(false);
    described.summation = said.summation.value_or(Summation::newest_first);
    described.division = said.division.value_or(Division::divide);
    const bool is_float = described.number == NumberKind::float32;
    described.rounding_is_said = said.rounding.has_value() || is_float;
    described.rounding = said.rounding.value_or(is_float ? Rounding::toward_zero : Rounding::floor);
    described.output_rounding = said.output_rounding.value_or(described.rounding);
    describe_coefficients(described);
    if (is_float) {
        described.coefficients_are_said = true;  // float32 says how
        return described;
    }
    described.rounding_at = said.rounding_at.value_or(RoundingAt::sum);
    if (described.rounding_at == RoundingAt::output &&
        (family_of(stage) != Family::sections || described.structure != Structure::direct_1)) {
        described.rounding_at = RoundingAt::sum;
    }
    described.fraction_saving = said.fraction_saving.value_or(false);
    described.accumulator_bits = said.accumulator_bits.value_or(wide_bits);
    described.accumulator_overflow = said.accumulator_overflow.value_or(Overflow::wrap);
    described.accumulator_fraction_bits = said.accumulator_fraction_bits;
    if (std::holds_alternative<CicDecimator>(stage.design)) described.discarded_bits = said.discarded_bits;
    describe_state(described);
    return described;
}

/// Words behind a stage that is not the last.
Port port_between(const FilterStage& stage, const Port& in, bool& is_said) {
    const StageArithmetic& said = stage.arithmetic;
    if (said.stage_format) return port_of(*said.stage_format, said.output_overflow);
    Port port;
    port.is_float =
        said.number.value_or(in.is_float ? NumberKind::float32 : NumberKind::integer) == NumberKind::float32;
    port.word = {wide_bits, port.is_float ? 0 : in.word.fraction_bits, said.output_overflow};
    is_said = port.is_float;
    return port;
}

/// The middle one of an odd number of words, in words as fine, is one of them: nothing is rounded.
bool rounds_nothing(const DescribedStage& stage) {
    const auto* median = std::get_if<Median>(&stage.stage.design);
    return median != nullptr && median->points % 2 != 0 && stage.number == NumberKind::integer &&
           stage.out.word.fraction_bits >= stage.in.word.fraction_bits;
}

FilterStage passing_stage() {
    FilterStage stage;
    stage.design = Fir{{1.0}};
    stage.coefficient_fraction_bits = 0;
    stage.kind = "fir";
    return stage;
}

Error is_missing(std::string_view word, std::string problem, std::string remedy) {
    return {ErrorKind::input, std::string(word), std::move(problem), std::move(remedy)};
}

/// Starts whose bits docs/arithmetic.md does not define: where several ways to hold the state are as good.
std::optional<Error> undefined_start(const DescribedStage& stage) {
    const Initial initial = stage.stage.initial;
    if (initial == Initial::zeros) return std::nullopt;
    const Family family = family_of(stage.stage);
    const bool is_float = stage.number == NumberKind::float32;
    const bool is_kept = family == Family::one_pole && stage.structure != Structure::direct_1;
    const bool is_filled = family == Family::average || family == Family::median || family == Family::fir;
    if ((!is_kept && !is_filled) || std::holds_alternative<FirInterpolator>(stage.stage.design)) {
        return is_missing("initial", "a start other than zeros has no twin",
                          "leave initial out, or judge by an error rule");
    }
    if (stage.fraction_saving && family != Family::median) {
        return is_missing("initial", "with fraction_saving a start other than zeros has no twin",
                          "leave initial or fraction_saving out, or judge by an error rule");
    }
    if (initial == Initial::growing && stage.division != Division::divide) {
        return is_missing("initial", "only an average that divides grows: the others have one divisor",
                          "give division = \"divide\", or judge by an error rule");
    }
    if (is_kept && !is_float && stage.state.fraction_bits < stage.in.word.fraction_bits) {
        return is_missing("initial", "states coarser than the input do not hold its first sample",
                          "give state_fraction_bits = " + std::to_string(stage.in.word.fraction_bits) +
                              " or more, or judge by an error rule");
    }
    return std::nullopt;
}

std::optional<Error> missing_in(const DescribedStage& stage) {
    if (auto error = undefined_start(stage)) return error;
    if (stage.number == NumberKind::float32 && family_of(stage.stage) == Family::cic) {
        return is_missing("number", "a cic in float32 has no twin: what its integrators lose no comb brings back",
                          "give number = \"integer\" and words of whole numbers, or judge by an error rule");
    }
    if (!stage.coefficients_are_said) {
        return is_missing("coefficient_fraction_bits", "coefficient_fraction_bits is not said",
                          "say as which multiples of 2^-n the coefficients are stored");
    }
    if (!stage.rounding_is_said) {
        return is_missing("rounding", "rounding is not said", "say how results are rounded: \"floor\" for a shift");
    }
    if (!stage.words_are_said) {
        return is_missing("stage_format", "stage_format is not said", "say the words between this stage and the next");
    }
    return std::nullopt;
}

}  // namespace

double step_of(const Word& word) { return std::ldexp(1.0, -word.fraction_bits); }
double lowest_value(const Word& word) { return -std::ldexp(1.0, word.bits - 1 - word.fraction_bits); }
double highest_value(const Word& word) { return -lowest_value(word) - step_of(word); }

int accumulator_fraction_bits_of(const DescribedStage& stage, int terms, int target) {
    if (stage.accumulator_fraction_bits) return *stage.accumulator_fraction_bits;
    return stage.rounding_at == RoundingAt::product ? target : terms;
}

std::int64_t stored_coefficient(const DescribedStage& stage, double coefficient) {
    const int bits = stage.coefficient_fraction_bits;
    return static_cast<std::int64_t>(
        std::ldexp(rounded_coefficient(coefficient, bits, stage.stage.arithmetic.coefficient_rounding), bits));
}

DescribedOrProblem describe(const FilterChain& given, const SampleFormat& input, const SampleFormat& output,
                            double output_per_input) {
    const FilterChain chain = given.empty() ? FilterChain{passing_stage()} : given;
    DescribedOrProblem result;
    DescribedChain described;
    const auto gain_bits = exact_log2(output_per_input);
    Port in = port_of(input, Overflow::saturate);
    for (std::size_t i = 0; i < chain.size(); ++i) {
        const bool is_last = i + 1 == chain.size();
        bool words_are_said = true;
        Port out;
        if (is_last) {
            out = port_of(output, chain[i].arithmetic.output_overflow);
            if (gain_bits) {
                out.word.fraction_bits += *gain_bits;
            } else if (!out.is_float) {
                // A step that is no coarser than one of the output.
                out.word.fraction_bits += std::ilogb(output_per_input) + 1;
                out.word.bits = wide_bits;
                described.output_ends = {lowest_value(output), highest_value(output)};
            }
        } else {
            out = port_between(chain[i], in, words_are_said);
        }
        DescribedStage stage = described_stage(chain[i], in, out);
        stage.words_are_said = words_are_said;
        if (given.empty() && out.word.fraction_bits >= in.word.fraction_bits) stage.rounding_is_said = true;
        if (rounds_nothing(stage)) stage.rounding_is_said = true;
        if (auto error = contradiction_in(stage)) {
            result.problem = ArithmeticProblem{i, *error};
            return result;
        }
        if (!described.missing) {
            if (auto error = missing_in(stage)) described.missing = ArithmeticProblem{i, *error};
        }
        described.stages.push_back(std::move(stage));
        in = out;
    }
    if (!described.missing && !gain_bits) {
        described.missing = ArithmeticProblem{
            chain.size() - 1,
            is_missing("output_per_input", "output_per_input is no power of two",
                       "only a power of two moves the binary point; give the scale as a stage of its own")};
    }
    result.described = std::move(described);
    return result;
}

}  // namespace halflsb
