#include "oracle/rules/drift_rule.hpp"

namespace halflsb {
namespace {

constexpr LimitWords slope_words{"max_slope_lsb_per_hour", "max_slope_ratio_per_hour", "max_slope_unit_per_hour", true};
constexpr LimitWords change_words{"max_change_lsb", "max_change_ratio", "max_change_unit"};

}  // namespace

const Recipe& drift_recipe() {
    static const Recipe recipe{
        "drift",
        "Slope of the error, response minus declared reference, over a long run; give at least one limit.",
        {
            limit_word("max_slope_lsb_per_hour", "LSB per hour", "Slope of the fitted line allowed, either sign."),
            limit_word("max_slope_ratio_per_hour", "of full scale per hour",
                       "Slope of the fitted line allowed, either sign."),
            limit_word("max_slope_unit_per_hour", "unit per hour", "Slope of the fitted line allowed, either sign."),
            limit_word("max_change_lsb", "LSB", "Change of the fitted line over the run allowed, either sign."),
            limit_word("max_change_ratio", "of full scale",
                       "Change of the fitted line over the run allowed, either sign."),
            limit_word("max_change_unit", "unit", "Change of the fitted line over the run allowed, either sign."),
        }};
    return recipe;
}

Outcome<DriftRule> make_drift_rule(const ParameterValues& values, const RuleContext& context) {
    auto slope = read_limit(values, drift_recipe(), slope_words, context);
    if (!slope) return slope.error();
    auto change = read_limit(values, drift_recipe(), change_words, context);
    if (!change) return change.error();
    if (!*slope && !*change) {
        return refused_word("kind", "a rule of kind \"drift\" without a limit judges nothing",
                            "give max_slope_lsb_per_hour or max_change_lsb (or their ratio and unit words)");
    }
    return DriftRule{*slope, *change};
}

}  // namespace halflsb
