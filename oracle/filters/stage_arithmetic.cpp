#include "oracle/filters/stage_arithmetic.hpp"

#include "stimuli/format_names.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

// The later of two words that contradict each other is to blame: the one of this table.
Error contradiction(const ParameterValues& values, std::string_view first, std::string_view second, std::string problem,
                    std::string remedy) {
    return {ErrorKind::input, std::string(values.has(first) ? first : second), std::move(problem), std::move(remedy)};
}

std::optional<Error> contradiction_in(const StageArithmetic& made, const ParameterValues& values) {
    if (!made.stage_format) return std::nullopt;
    const std::string format(made.stage_format->name);
    const int word_bits = made.stage_format->word_bits;
    if (made.accumulator_bits && *made.accumulator_bits < word_bits) {
        return contradiction(
            values, "accumulator_bits", "stage_format",
            "an accumulator of " + std::to_string(*made.accumulator_bits) + " bits cannot fill " +
                std::to_string(word_bits) + "-bit words of " + format,
            "give accumulator_bits = " + std::to_string(word_bits) + " or more, or a narrower stage_format");
    }
    if (!made.stage_format->has_lsb() && made.output_overflow == Overflow::wrap) {
        return contradiction(values, "output_overflow", "stage_format", format + " does not wrap",
                             "give output_overflow = \"saturate\", or a stage_format of whole numbers");
    }
    return std::nullopt;
}

}  // namespace

std::string_view name_of(Overflow overflow) { return overflow == Overflow::saturate ? "saturate" : "wrap"; }

const Recipe& arithmetic_recipe() {
    static const Recipe recipe{
        "arithmetic",
        "What the firmware promises of its arithmetic: [arithmetic] for every stage, [filter.arithmetic] for one.",
        {
            {.name = "coefficient_fraction_bits",
             .type = ParameterType::integer,
             .unit = "bits",
             .minimum = 0.0,
             .maximum = 62.0,
             .help = "The firmware stores each coefficient as a multiple of 2^-this, rounded half away from zero."},
            {.name = "accumulator_bits",
             .type = ParameterType::integer,
             .unit = "bits",
             .minimum = 8.0,
             .maximum = 64.0,
             .help = "Width of the sum of products."},
            {.name = "rounding",
             .type = ParameterType::choice,
             .choices = rounding_names(),
             .help = "Rounding of the result to output words.",
             .optional_choice = true},
            {.name = "output_overflow",
             .type = ParameterType::choice,
             .choices = {"saturate", "wrap"},
             .help = "What becomes of a result beyond the ends of the output words."},
            {.name = "stage_format",
             .type = ParameterType::choice,
             .choices = format_names(),
             .help = "Words between this stage and the next, at whose ends it overflows; wide when left out.",
             .optional_choice = true},
        }};
    return recipe;
}

Outcome<StageArithmetic> make_arithmetic(const ParameterValues& values, const StageArithmetic& defaults) {
    const Recipe& recipe = arithmetic_recipe();
    if (auto error = misfit_of(recipe, values)) return *error;
    StageArithmetic made = defaults;
    if (const auto bits = values.integer(recipe, "coefficient_fraction_bits"))
        made.coefficient_fraction_bits = static_cast<int>(*bits);
    if (const auto bits = values.integer(recipe, "accumulator_bits")) made.accumulator_bits = static_cast<int>(*bits);
    if (const auto word = values.text(recipe, "rounding")) made.rounding = rounding_from(*word);
    // Asked for, not defaulted: what is left out is as the defaults have it.
    if (values.has("output_overflow")) {
        made.output_overflow = values.text(recipe, "output_overflow") == "wrap" ? Overflow::wrap : Overflow::saturate;
    }
    if (const auto word = values.text(recipe, "stage_format")) made.stage_format = sample_format(*word);
    if (auto error = contradiction_in(made, values)) return *error;
    return made;
}

}  // namespace halflsb
