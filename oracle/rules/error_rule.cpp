#include "oracle/rules/error_rule.hpp"

#include <utility>

namespace halflsb {
namespace {

constexpr LimitWords rms_words{"rms_lsb", "rms_ratio", "rms_unit"};
constexpr LimitWords bias_words{"bias_lsb", "bias_ratio", "bias_unit"};

}  // namespace

const Recipe& error_recipe() {
    static const Recipe recipe{
        "error",
        "Response minus declared reference, over all samples; give at least one limit.",
        {
            derivable_word("max_lsb", "LSB", "Largest error allowed, in steps of the output format."),
            derivable_word("max_ratio", "of full scale",
                           "Largest error allowed, as a fraction of the output's full scale."),
            derivable_word("max_unit", "unit", "Largest error allowed, in the unit of [signal]."),
            derivable_word("rms_lsb", "LSB", "Root mean square of the error allowed."),
            derivable_word("rms_ratio", "of full scale", "Root mean square of the error allowed."),
            derivable_word("rms_unit", "unit", "Root mean square of the error allowed."),
            derivable_word("bias_lsb", "LSB", "Mean of the error allowed, either sign."),
            derivable_word("bias_ratio", "of full scale", "Mean of the error allowed, either sign."),
            derivable_word("bias_unit", "unit", "Mean of the error allowed, either sign."),
            {.name = "min_snr_db",
             .type = ParameterType::real,
             .unit = "dB",
             .help = "Power of the reference over power of the error, at least; an exact match passes."},
        }};
    return recipe;
}

Outcome<ErrorRule> make_error_rule(const ParameterValues& values, const RuleContext& context) {
    ErrorRule rule;
    for (const auto& [words, target] : {std::pair{largest_words, &rule.largest}, std::pair{rms_words, &rule.rms},
                                        std::pair{bias_words, &rule.bias}}) {
        auto limit = read_limit(values, error_recipe(), words, context);
        if (!limit) return limit.error();
        *target = *limit;
    }
    rule.min_snr_db = values.number(error_recipe(), "min_snr_db");
    if (!rule.largest && !rule.rms && !rule.bias && !rule.min_snr_db) {
        return refused_word("kind", "a rule of kind \"error\" without a limit judges nothing",
                            "give at least one of max_lsb, rms_lsb, bias_lsb (or _ratio, _unit) and min_snr_db");
    }
    return rule;
}

}  // namespace halflsb
