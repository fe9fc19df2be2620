#include "oracle/rules/limit.hpp"

#include <cmath>
#include <string>
#include <utility>

#include "stimuli/number_text.hpp"

namespace halflsb {

Parameter limit_word(std::string_view name, std::string_view unit, std::string_view help) {
    return Parameter{.name = name, .type = ParameterType::real, .unit = unit, .minimum = 0.0, .help = help};
}

Parameter derivable_word(std::string_view name, std::string_view unit, std::string_view help) {
    Parameter parameter = limit_word(name, unit, help);
    parameter.choices = {"derived"};
    return parameter;
}

Outcome<std::optional<Limit>> read_limit(const ParameterValues& values, const Recipe& recipe, const LimitWords& words,
                                         const RuleContext& context) {
    std::optional<Limit> limit;
    std::string_view seen;
    for (const auto& [name, in] :
         {std::pair{words.lsb, Limit::In::lsb}, std::pair{words.ratio, Limit::In::full_scale_ratio},
          std::pair{words.unit, Limit::In::unit}}) {
        const auto number = values.number(recipe, name);
        const bool is_derived = values.text(recipe, name) == "derived";
        if (!number && !is_derived) continue;
        if (limit) {
            return refused_word(
                std::string(name),
                "the same limit is given twice, as " + std::string(seen) + " and as " + std::string(name),
                "keep one of the two");
        }
        if (in == Limit::In::lsb && !context.output_has_lsb) {
            return refused_word(std::string(name), "an f32 output has no LSB",
                                "use " + std::string(words.ratio) + " or " + std::string(words.unit));
        }
        if (in == Limit::In::unit && !context.full_scale_unit) {
            return refused_word(std::string(name), "nothing says what full scale is worth in the unit",
                                "set full_scale_unit in [signal], or use " + std::string(words.ratio));
        }
        if (is_derived) {
            limit = Limit{0.0, in, true};
            seen = name;
            continue;
        }
        const double widest = in == Limit::In::lsb                ? context.output_full_scale_lsb
                              : in == Limit::In::full_scale_ratio ? 1.0
                                                                  : std::fabs(*context.full_scale_unit);
        if (!words.is_rate && !(*number <= widest)) {
            return refused_word(std::string(name),
                                number_text(*number) + " is wider than full scale (" + number_text(widest) + ")",
                                "a limit that wide judges nothing; give the error that the design allows");
        }
        limit = Limit{*number, in};
        seen = name;
    }
    return limit;
}

}  // namespace halflsb
