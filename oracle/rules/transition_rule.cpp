#include "oracle/rules/transition_rule.hpp"

namespace halflsb {
namespace {

constexpr LimitWords final_words{"final_lsb", "final_ratio", "final_unit"};

Parameter percent_word(std::string_view name, double minimum, double maximum, double fallback, std::string_view help) {
    return {.name = name, .unit = "%", .minimum = minimum, .maximum = maximum, .default_value = fallback, .help = help};
}

}  // namespace

const Recipe& transition_recipe() {
    static const Recipe recipe{
        "transition",
        "The response to a step (IEEE 181 terms), in % of the step that the design makes of it; give at least one "
        "limit.",
        {
            limit_word("max_rise_samples", "samples", "Longest rise, from low_percent to high_percent."),
            limit_word("max_fall_samples", "samples", "Longest fall, the same of a step down."),
            limit_word("max_overshoot_percent", "%", "Farthest beyond the final level."),
            limit_word("max_undershoot_percent", "%", "Farthest short of the final level once it was reached."),
            limit_word("max_preshoot_percent", "%", "Farthest to the wrong side before the transition."),
            limit_word("max_settling_samples", "samples",
                       "Longest time from 50 % until the response stays within band_percent of the final level."),
            limit_word("final_lsb", "LSB",
                       "Distance allowed between the mean at the end and the design's final level."),
            limit_word("final_ratio", "of full scale", "The same as a fraction of the output's full scale."),
            limit_word("final_unit", "unit", "The same in the unit of [signal]."),
            percent_word("band_percent", 0.001, 49.0, TransitionRule{}.band_percent,
                         "Half width of the band in which the response is settled."),
            percent_word("low_percent", 1.0, 49.0, TransitionRule{}.low_percent, "Where rise or fall begin."),
            percent_word("high_percent", 51.0, 99.0, TransitionRule{}.high_percent, "Where they end."),
        }};
    return recipe;
}

Outcome<TransitionRule> make_transition_rule(const ParameterValues& values, const RuleContext& context) {
    const Recipe& recipe = transition_recipe();
    TransitionRule rule;
    rule.max_rise_samples = values.number(recipe, "max_rise_samples");
    rule.max_fall_samples = values.number(recipe, "max_fall_samples");
    rule.max_overshoot_percent = values.number(recipe, "max_overshoot_percent");
    rule.max_undershoot_percent = values.number(recipe, "max_undershoot_percent");
    rule.max_preshoot_percent = values.number(recipe, "max_preshoot_percent");
    rule.max_settling_samples = values.number(recipe, "max_settling_samples");
    rule.band_percent = *values.number(recipe, "band_percent");
    rule.low_percent = *values.number(recipe, "low_percent");
    rule.high_percent = *values.number(recipe, "high_percent");
    auto final_value = read_limit(values, recipe, final_words, context);
    if (!final_value) return final_value.error();
    rule.final_value = *final_value;
    if (rule.max_rise_samples && rule.max_fall_samples) {
        return refused_word("max_fall_samples", "max_rise_samples is given too, and a step goes one way",
                            "keep the one that fits the stimulus");
    }
    if (!rule.max_rise_samples && !rule.max_fall_samples && !rule.max_overshoot_percent &&
        !rule.max_undershoot_percent && !rule.max_preshoot_percent && !rule.max_settling_samples && !rule.final_value) {
        return refused_word("kind", "a rule of kind \"transition\" without a limit judges nothing",
                            "give at least one of max_rise_samples, max_fall_samples, max_overshoot_percent, "
                            "max_undershoot_percent, max_preshoot_percent, max_settling_samples and final_lsb (or "
                            "_ratio, _unit)");
    }
    return rule;
}

}  // namespace halflsb
