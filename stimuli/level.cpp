// A level in one of its three units: a ratio of full scale, codes of the input format, or the
// engineering unit. Ratios are what the shapes work in.
#include <array>
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

/// Parameter names outlive every recipe, so each must be a literal: "level" with its three units and so on.
struct LevelNames {
    std::string_view name, ratio, codes, unit;
};

constexpr std::array<LevelNames, 3> level_names = {{
    {"level", "level_ratio", "level_codes", "level_unit"},
    {"from", "from_ratio", "from_codes", "from_unit"},
    {"to", "to_ratio", "to_codes", "to_unit"},
}};

const LevelNames& names_of(std::string_view name) {
    for (const LevelNames& names : level_names) {
        if (names.name == name) return names;
    }
    return level_names[0];
}

/// Of the ratio of `codes` steps of an LSB.
Outcome<double> ratio_of_codes(const LevelNames& names, std::int64_t codes, bool positive,
                               const StimulusContext& context) {
    if (!context.input.has_lsb()) {
        return refused(names.codes, "format " + std::string(context.input.name) + " has no LSB",
                       "give " + std::string(names.ratio) + " instead");
    }
    const std::int64_t end = std::int64_t{1} << (context.input.word_bits - 1);
    if (codes < -end || codes >= end) {
        // Codes of offset binary are all positive; a level counts from its mid-code.
        const bool is_offset = context.input.family == FormatFamily::u;
        return refused(
            names.codes,
            std::to_string(codes) + (is_offset ? " is no distance from the mid-code of " : " is not a code of ") +
                std::string(context.input.name),
            "give a whole number from " + std::to_string(positive ? 1 : -end) + " to " + std::to_string(end - 1));
    }
    return static_cast<double>(codes) / static_cast<double>(end);
}

Outcome<double> ratio_of_unit(const LevelNames& names, double level, const StimulusContext& context) {
    if (!context.full_scale_unit) {
        return refused(names.unit, "nothing says what full scale of the input means in a unit",
                       "say so in [signal], or give " + std::string(names.ratio) + " instead");
    }
    const double full_scale = *context.full_scale_unit;
    const double ratio = level / full_scale;
    if (!(std::abs(ratio) <= 1.0)) {
        return refused(names.unit, number_text(level) + " is beyond full scale, " + number_text(full_scale),
                       "give at most " + number_text(std::abs(full_scale)) + " in size");
    }
    return ratio;
}

}  // namespace

std::vector<Parameter> level_parameters(std::string_view name, LevelSign sign, std::optional<double> default_ratio,
                                        std::string_view help) {
    const LevelNames& names = names_of(name);
    const bool positive = sign == LevelSign::positive;
    return {
        {.name = names.ratio,
         .type = ParameterType::real,
         .unit = "of full scale",
         .minimum = positive ? 0.0 : -1.0,
         .maximum = 1.0,
         .above_minimum = positive,
         .default_value = default_ratio,
         .help = help},
        {.name = names.codes,
         .type = ParameterType::integer,
         .unit = "LSB",
         .minimum = positive ? 1.0 : -2147483648.0,
         .maximum = 2147483647.0,
         .help = "The same in steps of the input format, in place of the ratio; not for f32."},
        {.name = names.unit,
         .type = ParameterType::real,
         .unit = "unit",
         .minimum = positive ? 0.0 : -no_limit,
         .above_minimum = positive,
         .help = "The same in the unit of the input, in place of the ratio; at most full scale."},
    };
}

Outcome<double> level_of(std::string_view name, const Recipe& recipe, const ParameterValues& values,
                         const StimulusContext& context) {
    const LevelNames& names = names_of(name);
    std::string_view given;
    for (const std::string_view each : {names.ratio, names.codes, names.unit}) {
        if (!values.has(each)) continue;
        if (!given.empty()) return refused(each, std::string(given) + " is given too", "keep one of the two");
        given = each;
    }
    if (given == names.codes) {
        const Parameter* parameter = find_parameter(recipe, names.codes);
        const bool positive = parameter != nullptr && parameter->minimum > 0.0;
        return ratio_of_codes(names, values.integer(recipe, given).value_or(0), positive, context);
    }
    if (given == names.unit) return ratio_of_unit(names, values.number(recipe, given).value_or(0.0), context);
    const auto ratio = values.number(recipe, names.ratio);
    if (!ratio) {
        return refused(names.ratio,
                       "\"" + std::string(recipe.name) + "\" needs " + std::string(names.ratio) + ", " +
                           std::string(names.codes) + " or " + std::string(names.unit),
                       "give one of them");
    }
    return *ratio;
}

}  // namespace halflsb
