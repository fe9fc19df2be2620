// The table of the words of [arithmetic] and [filter.arithmetic].
#include "oracle/filters/arithmetic_names.hpp"
#include "stimuli/format_names.hpp"

namespace halflsb {

namespace {

Parameter bits(std::string_view name, double fewest, double most, std::string_view help) {
    return {
        .name = name, .type = ParameterType::integer, .unit = "bits", .minimum = fewest, .maximum = most, .help = help};
}

Parameter one_of_words(std::string_view name, std::vector<std::string_view> choices, std::string_view help) {
    return {.name = name,
            .type = ParameterType::choice,
            .choices = std::move(choices),
            .help = help,
            .optional_choice = true};
}

}  // namespace

std::string_view name_of(Overflow overflow) { return name_in_words(overflow); }
std::string_view name_of(NumberKind number) { return name_in_words(number); }
std::string_view name_of(Structure structure) { return name_in_words(structure); }
std::string_view name_of(RoundingAt place) { return name_in_words(place); }
std::string_view name_of(Division division) { return name_in_words(division); }
std::string_view name_of(Summation order) { return name_in_words(order); }
std::string_view name_of(FeedbackCoefficients sign) { return name_in_words(sign); }

const Recipe& arithmetic_recipe() {
    static const Recipe recipe{
        "arithmetic",
        "What the firmware promises of its arithmetic: [arithmetic] for every stage, [filter.arithmetic] for one.",
        {
            one_of_words("number", words_of<NumberKind>(),
                         "In what the stage computes; float32 when left out where its output words are f32."),
            one_of_words("structure", words_of<Structure>(),
                         "How the stage is wired; the first one of its kind of filter when left out."),
            bits("coefficient_bits", 8.0, 64.0, "Width of a stored coefficient, its sign included."),
            bits("coefficient_fraction_bits", 0.0, 62.0,
                 "The firmware stores each coefficient as a multiple of 2^-this, rounded by coefficient_rounding."),
            one_of_words("coefficient_rounding", rounding_names(),
                         "Rounding of the coefficients to what is stored; half-away when left out."),
            one_of_words(
                "feedback_coefficients", {"added", "subtracted"},
                "Whether the stored a1, a2 have their sign turned round and are added (when left out), or not."),
            bits("accumulator_bits", 8.0, 64.0, "Width of the sum of products; as wide as it takes when left out."),
            bits("accumulator_fraction_bits", 0.0, 126.0,
                 "Fraction bits of that sum; as many as the products have when left out, or as rounding_at says."),
            one_of_words("accumulator_overflow", {name_of(Overflow::wrap), name_of(Overflow::saturate)},
                         "What becomes of a partial sum beyond the ends of the accumulator; it wraps when left out."),
            one_of_words("rounding_at", words_of<RoundingAt>(),
                         "Where results are shortened: each sum once (when left out), each product, or only the output "
                         "of a cascade."),
            one_of_words("rounding", rounding_names(), "Rounding of what is shortened."),
            one_of_words("output_rounding", rounding_names(),
                         "Rounding from state words to output words; that of rounding when left out."),
            one_of_words("fraction_saving", {"off", "on"}, "Whether what a rounding drops is added to the next sum."),
            bits("state_bits", 8.0, 64.0,
                 "Width of what is kept from sample to sample beside inputs; of the output words when left out."),
            bits("state_fraction_bits", 0.0, 126.0, "Its fraction bits; those of the output words when left out."),
            one_of_words("state_overflow", words_of<Overflow>(),
                         "What becomes of a state beyond its ends; as output_overflow when left out."),
            {.name = "discarded_bits",
             .type = ParameterType::integers,
             .unit = "bits",
             .minimum = 0.0,
             .maximum = 62.0,
             .help = "Of a CIC decimator: low bits that each integrator, then each comb no longer has, counted from "
                     "the LSB of the input; none when left out."},
            {.name = "output_overflow",
             .type = ParameterType::choice,
             .choices = words_of<Overflow>(),
             .help = "What becomes of a result beyond the ends of the output words."},
            one_of_words("stage_format", format_names(),
                         "Words between this stage and the next, at whose ends it overflows; wide when left out."),
            one_of_words("division", words_of<Division>(),
                         "How a moving average divides; by a reciprocal of coefficient_fraction_bits."),
            one_of_words("multiply_add", {"separate", "fused"},
                         "Whether float32 rounds each product before it is added; separate when left out."),
            one_of_words("summation", words_of<Summation>(),
                         "In which order a fir or a fresh sum adds; newest-first when left out."),
        }};
    return recipe;
}

}  // namespace halflsb
