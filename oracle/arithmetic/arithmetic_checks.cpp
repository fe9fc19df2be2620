#include "oracle/arithmetic/arithmetic_checks.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/cic_registers.hpp"
#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/arithmetic/family.hpp"
#include "oracle/arithmetic/named_coefficients.hpp"
#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/stability.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

Error refuse(std::string_view word, std::string problem, std::string remedy) {
    return {ErrorKind::input, std::string(word), std::move(problem), std::move(remedy)};
}

std::string text_of(int number) { return std::to_string(number); }

bool fits(double stored, int bits, int fraction) {
    const double limit = std::ldexp(1.0, bits - 1 - fraction);
    return stored >= -limit && stored < limit;
}

/// Fraction bits with which the whole list fits words of `bits`; nullopt: not even whole numbers do, or a one-pole
/// would lose its coefficient.
std::optional<int> fitting_fraction_bits(const DescribedStage& described, const std::vector<NamedCoefficient>& all,
                                         int bits, int below) {
    const Rounding rounding = described.stage.arithmetic.coefficient_rounding;
    for (int fraction = below - 1; fraction >= 0; --fraction) {
        const auto stored = [&](const NamedCoefficient& c) { return rounded_coefficient(c.value, fraction, rounding); };
        if (family_of(described.stage) == Family::one_pole && stored(all.front()) == 0.0) return std::nullopt;
        if (std::all_of(all.begin(), all.end(),
                        [&](const NamedCoefficient& c) { return fits(stored(c), bits, fraction); }))
            return fraction;
    }
    return std::nullopt;
}

/// Words that hold the whole list, fewer fraction bits where need be.
std::string fitting_words_text(const DescribedStage& described, const std::vector<NamedCoefficient>& all, int bits) {
    const int fraction = described.coefficient_fraction_bits;
    if (const auto fitting = fitting_fraction_bits(described, all, bits, fraction))
        return "coefficient_fraction_bits = " + text_of(*fitting) + " would do";
    const Rounding rounding = described.stage.arithmetic.coefficient_rounding;
    for (int wider = bits + 1; wider <= 64; ++wider) {
        if (std::all_of(all.begin(), all.end(), [&](const NamedCoefficient& c) {
                return fits(rounded_coefficient(c.value, fraction, rounding), wider, fraction);
            }))
            return "coefficient_bits = " + text_of(wider) + " would do";
    }
    return "coefficient_bits = 64 with coefficient_fraction_bits = " +
           text_of(fitting_fraction_bits(described, all, 64, fraction).value_or(0)) + " would do";
}

std::optional<Error> coefficient_outside(const DescribedStage& described) {
    if (!described.coefficients_are_said) return std::nullopt;
    const auto& said_bits = described.stage.arithmetic.coefficient_bits;
    const int bits = said_bits.value_or(64), fraction = described.coefficient_fraction_bits;
    const Rounding rounding = described.stage.arithmetic.coefficient_rounding;
    // A shift stores nothing: its 1 is in the program.
    if (is_by_shift(described.stage)) return std::nullopt;
    const std::vector<NamedCoefficient> all = named_coefficients(described);
    for (const NamedCoefficient& c : all) {
        if (fits(rounded_coefficient(c.value, fraction, rounding), bits, fraction)) continue;
        return refuse(said_bits ? "coefficient_bits" : "coefficient_fraction_bits",
                      c.name + " = " + number_text(c.value) + " does not fit " + text_of(bits) + "-bit words with " +
                          text_of(fraction) + " fraction bits",
                      fitting_words_text(described, all, bits));
    }
    return std::nullopt;
}

/// The width that holds `largest` (a size, in steps of the accumulator).
int bits_for(double largest) {
    int bits = 2;
    while (std::ldexp(1.0, bits - 1) < largest) ++bits;
    return bits;
}

/// For a product that no accumulator of 64 bits holds: `excess` bits must go.
std::string fewer_fraction_bits_text(const DescribedStage& described, int excess) {
    if (described.accumulator_fraction_bits && *described.accumulator_fraction_bits >= excess)
        return "accumulator_fraction_bits = " + text_of(*described.accumulator_fraction_bits - excess) +
               " with accumulator_bits = 64 would do";
    const auto& of_state = described.stage.arithmetic.state_fraction_bits;
    const bool feeds_back_states = of_state && described.structure != Structure::transposed_2;
    if (feeds_back_states && *of_state - excess >= described.in.word.fraction_bits)
        return "state_fraction_bits = " + text_of(*of_state - excess) + " with accumulator_bits = 64 would do";
    const int left = described.coefficient_fraction_bits - excess;
    if (left < 0) return "give fewer coefficient_fraction_bits and state_fraction_bits";
    return "coefficient_fraction_bits = " + text_of(left) + " with accumulator_bits = 64 would do" +
           (family_of(described.stage) == Family::one_pole ? "" : ", or rounding_at = \"product\"");
}

std::optional<Error> accumulator_too_narrow(const DescribedStage& described) {
    const Family family = family_of(described.stage);
    if (described.accumulator_bits == wide_bits || family == Family::median || family == Family::cic)
        return std::nullopt;
    const Word& in = described.in.word;
    const bool is_average = family == Family::average;
    if (in.bits == wide_bits || (!is_average && !described.coefficients_are_said)) return std::nullopt;
    const double largest_input = std::ldexp(1.0, in.bits - 1);
    double largest = largest_input;
    std::string what = "one sample";
    if (!is_average) {
        const int terms = in.fraction_bits + described.coefficient_fraction_bits;
        const bool is_recursive = family != Family::fir;
        // Of transposed-2 what is fed back are output words; its states have the fraction bits of products already.
        const bool feeds_back_states = is_recursive && described.structure != Structure::transposed_2;
        const Word& target = feeds_back_states ? described.state : described.out.word;
        int most = is_recursive ? std::max(in.fraction_bits, target.fraction_bits) + described.coefficient_fraction_bits
                                : terms;
        // The input of direct-2 is a term without a coefficient.
        if (is_recursive && described.structure == Structure::direct_2)
            most = std::max(in.fraction_bits, target.fraction_bits + described.coefficient_fraction_bits);
        const int fraction = accumulator_fraction_bits_of(described, most, target.fraction_bits);
        largest = 0.0;
        // Products of direct-2 are those of its state, whose words may end before the input does.
        double largest_value = std::ldexp(largest_input, -in.fraction_bits);
        if (is_recursive && described.structure == Structure::direct_2 && described.state.bits != wide_bits)
            largest_value = std::min(largest_value, -lowest_value(described.state));
        for (const NamedCoefficient& c : named_coefficients(described)) {
            const double product = std::ldexp(std::fabs(c.value), fraction) * largest_value;
            if (product <= largest) continue;
            largest = product;
            what = "one product, that of " + c.name + " = " + number_text(c.value);
        }
    }
    if (largest <= std::ldexp(1.0, described.accumulator_bits - 1)) return std::nullopt;
    const int enough = bits_for(largest);
    return refuse("accumulator_bits",
                  "an accumulator of " + text_of(described.accumulator_bits) + " bits cannot hold " + what,
                  enough <= 64 ? "accumulator_bits = " + text_of(enough) + " would do for one; a sum needs more"
                               : fewer_fraction_bits_text(described, enough - 64));
}

std::optional<Error> saving_without_loss(const DescribedStage& described) {
    if (!described.fraction_saving) return std::nullopt;
    if (described.structure == Structure::transposed_2) {
        return refuse("fraction_saving", "transposed-2 saves no fraction: its states hold it already",
                      "leave fraction_saving out, or give another structure");
    }
    if (described.rounding_at == RoundingAt::product) {
        return refuse("fraction_saving", "where each product is rounded no sum has a fraction to save",
                      "leave fraction_saving out, or give rounding_at = \"sum\"");
    }
    if (family_of(described.stage) == Family::one_pole && described.structure != Structure::direct_1) {
        return refuse("fraction_saving", "a one-pole of this structure saves no fraction",
                      "give structure = \"direct-1\", or state_fraction_bits in place of fraction_saving");
    }
    return std::nullopt;
}

std::optional<Error> division_that_cannot_be(const DescribedStage& described) {
    const auto* average = std::get_if<MovingAverage>(&described.stage.design);
    if (average == nullptr) return std::nullopt;
    const int points = average->points;
    if (described.division == Division::shift && (points & (points - 1)) != 0) {
        return refuse("division", text_of(points) + " points are no power of two, so no shift divides by them",
                      "give division = \"divide\" or \"reciprocal\"");
    }
    if (described.division != Division::reciprocal || described.number == NumberKind::float32) return std::nullopt;
    if (!described.stage.coefficient_fraction_bits) {
        return refuse("division", "nothing says how finely the reciprocal of points is stored",
                      "give coefficient_fraction_bits");
    }
    if (stored_coefficient(described, 1.0 / points) == 0) {
        return refuse("coefficient_fraction_bits", "the reciprocal of " + text_of(points) + " points is stored as 0",
                      "coefficient_fraction_bits = " + text_of(bits_for(points) + 6) + " would do");
    }
    return std::nullopt;
}

std::optional<Error> number_that_cannot_be(const DescribedStage& described) {
    if (described.number != NumberKind::integer || !(described.in.is_float || described.out.is_float))
        return std::nullopt;
    return refuse("number",
                  described.in.is_float ? "integers are computed from f32 words" : "f32 words come from integers",
                  "give number = \"float32\", or words of whole numbers");
}

/// What puts a pole where none may be: "a1 = ..., a2 = ... of section 2"; nothing where all decays.
std::optional<std::string> unstable_part(const FilterStage& stage) {
    const std::string all = "its coefficients";
    if (const auto* recursion = std::get_if<Recursion>(&stage.design); recursion && !is_stable(*recursion)) return all;
    if (const auto* comb = std::get_if<Comb>(&stage.design); comb && std::fabs(comb->feedback) >= 1.0) return all;
    const auto* cascade = std::get_if<BiquadCascade>(&stage.design);
    if (cascade == nullptr) return std::nullopt;
    for (std::size_t j = 0; j < cascade->sections.size(); ++j) {
        const BiquadSection& s = cascade->sections[j];
        if (is_stable(s)) continue;
        return "a1 = " + number_text(s.a1) + ", a2 = " + number_text(s.a2) + " of section " +
               text_of(static_cast<int>(j) + 1);
    }
    return std::nullopt;
}

/// Rounded to 24 bits, poles near the circle may come to lie on it.
std::optional<Error> unstable_as_floats(const DescribedStage& described) {
    if (unstable_part(described.stage)) return std::nullopt;  // not the words' fault
    for (const FilterStage& stored : exact_stages(described)) {
        if (const auto part = unstable_part(stored)) {
            return refuse("number",
                          "in float32 the filter is unstable: " + *part + " put a pole on the unit circle or outside",
                          "design it for a lower rate, or compute it in whole numbers with more bits");
        }
    }
    return std::nullopt;
}

}  // namespace

std::optional<Error> contradiction_in(const DescribedStage& stage) {
    if (auto error = number_that_cannot_be(stage)) return error;
    if (auto error = division_that_cannot_be(stage)) return error;
    if (stage.number == NumberKind::float32) return unstable_as_floats(stage);
    if (auto error = coefficient_outside(stage)) return error;
    if (auto error = accumulator_too_narrow(stage)) return error;
    if (auto error = registers_that_cannot_be(stage)) return error;
    return saving_without_loss(stage);
}

}  // namespace halflsb
