#include "oracle/filters/stage_arithmetic.hpp"

namespace halflsb {

namespace {

std::vector<std::string_view> format_names() {
    std::vector<std::string_view> names;
    for (const SampleFormat& format : sample_formats()) names.push_back(format.name);
    return names;
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
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 24,
             .help = "Rounding of the result to output words: floor, toward-zero, half-up, half-away or half-even."},
            {.name = "output_overflow",
             .type = ParameterType::choice,
             .choices = {"saturate", "wrap"},
             .help = "What becomes of a result beyond the ends of the output words."},
            {.name = "stage_format",
             .type = ParameterType::choice,
             .choices = format_names(),
             .help = "Words between this stage and the next, at whose ends it overflows; wide when left out."},
        }};
    return recipe;
}

Outcome<StageArithmetic> make_arithmetic(const ParameterValues& values, const StageArithmetic& defaults) {
    StageArithmetic made = defaults;
    const Recipe& recipe = arithmetic_recipe();
    if (const auto bits = values.integer(recipe, "coefficient_fraction_bits"))
        made.coefficient_fraction_bits = static_cast<int>(*bits);
    if (const auto bits = values.integer(recipe, "accumulator_bits")) made.accumulator_bits = static_cast<int>(*bits);
    return made;
}

}  // namespace halflsb
