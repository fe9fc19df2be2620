#include "oracle/filters/stage_arithmetic.hpp"

#include "oracle/filters/arithmetic_names.hpp"
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

/// The value that the word stands for; what was not given stays as it is.
template <class Value>
void take(const ParameterValues& values, std::string_view name, std::optional<Value>& target) {
    if (const auto word = values.text(arithmetic_recipe(), name)) target = value_from<Value>(*word);
}

void take(const ParameterValues& values, std::string_view name, std::optional<int>& target) {
    if (const auto number = values.integer(arithmetic_recipe(), name)) target = static_cast<int>(*number);
}

void take(const ParameterValues& values, std::string_view name, std::string_view yes, std::optional<bool>& target) {
    if (const auto word = values.text(arithmetic_recipe(), name)) target = *word == yes;
}

void take(const ParameterValues& values, std::string_view name, std::optional<Rounding>& target) {
    if (const auto word = values.text(arithmetic_recipe(), name)) target = rounding_from(*word);
}

}  // namespace

Outcome<StageArithmetic> make_arithmetic(const ParameterValues& values, const StageArithmetic& defaults) {
    const Recipe& recipe = arithmetic_recipe();
    if (auto error = misfit_of(recipe, values)) return *error;
    StageArithmetic made = defaults;
    take(values, "coefficient_fraction_bits", made.coefficient_fraction_bits);
    take(values, "coefficient_bits", made.coefficient_bits);
    if (const auto word = values.text(recipe, "coefficient_rounding"))
        made.coefficient_rounding = *rounding_from(*word);
    take(values, "feedback_coefficients", made.feedback_coefficients);
    take(values, "number", made.number);
    take(values, "structure", made.structure);
    take(values, "accumulator_bits", made.accumulator_bits);
    take(values, "accumulator_fraction_bits", made.accumulator_fraction_bits);
    take(values, "accumulator_overflow", made.accumulator_overflow);
    take(values, "rounding_at", made.rounding_at);
    take(values, "rounding", made.rounding);
    take(values, "output_rounding", made.output_rounding);
    take(values, "fraction_saving", "on", made.fraction_saving);
    take(values, "state_bits", made.state_bits);
    take(values, "state_fraction_bits", made.state_fraction_bits);
    take(values, "state_overflow", made.state_overflow);
    if (values.has("discarded_bits")) {
        made.discarded_bits.clear();
        for (const double bits : values.numbers("discarded_bits"))
            made.discarded_bits.push_back(static_cast<int>(bits));
    }
    take(values, "division", made.division);
    take(values, "multiply_add", "fused", made.fused_multiply_add);
    take(values, "summation", made.summation);
    // Asked for, not defaulted: what is left out is as the defaults have it.
    if (values.has("output_overflow")) {
        made.output_overflow = *value_from<Overflow>(*values.text(recipe, "output_overflow"));
    }
    if (const auto word = values.text(recipe, "stage_format")) made.stage_format = sample_format(*word);
    if (auto error = contradiction_in(made, values)) return *error;
    return made;
}

}  // namespace halflsb
