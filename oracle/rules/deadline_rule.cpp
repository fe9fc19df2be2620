#include "oracle/rules/deadline_rule.hpp"

#include "stimuli/number_text.hpp"

namespace halflsb {

const Recipe& deadline_recipe() {
    static const Recipe recipe{
        "deadline",
        "What the filter takes a sample, in ticks of the board's own counter; give at least one limit.",
        {
            {.name = "max_ticks",
             .unit = "ticks",
             .minimum = 1.0,
             .maximum = most_ticks_told - 1.0,
             .help = "Most that any sample may take."},
            {.name = "max_period_ratio",
             .unit = "of the sample period",
             .minimum = 0.0,
             .maximum = 1000.0,
             .above_minimum = true,
             .help = "Longest time that any sample may take, over the time between two samples that are sent."},
            {.name = "percentile",
             .unit = "%",
             .minimum = 0.0,
             .maximum = 100.0,
             .above_minimum = true,
             .help = "The part of the blocks that max_percentile_ticks holds for: 99.9 lets one in a thousand take "
                     "longer."},
            {.name = "max_percentile_ticks",
             .unit = "ticks",
             .minimum = 1.0,
             .maximum = most_ticks_told - 1.0,
             .help = "Most that a sample may take in the mean over its block, in that part of the blocks."},
        }};
    return recipe;
}

Outcome<DeadlineRule> make_deadline_rule(const ParameterValues& values, const RuleContext&) {
    DeadlineRule rule;
    rule.max_ticks = values.number(deadline_recipe(), "max_ticks");
    rule.max_period_ratio = values.number(deadline_recipe(), "max_period_ratio");
    rule.percentile = values.number(deadline_recipe(), "percentile");
    rule.max_percentile_ticks = values.number(deadline_recipe(), "max_percentile_ticks");
    if (rule.max_percentile_ticks && !rule.percentile) {
        return refused_word("max_percentile_ticks", "nothing says which percentile it limits",
                            "give percentile, such as 99.9");
    }
    if (rule.percentile && !rule.max_percentile_ticks) {
        return refused_word("percentile", "nothing limits this percentile",
                            "give max_percentile_ticks; the report shows the median and 99 % anyway");
    }
    if (!rule.max_ticks && !rule.max_period_ratio && !rule.max_percentile_ticks) {
        return refused_word("kind", "a rule of kind \"deadline\" without a limit judges nothing",
                            "give max_ticks, max_period_ratio, or percentile with max_percentile_ticks");
    }
    if (rule.max_ticks && rule.max_percentile_ticks && *rule.max_percentile_ticks > *rule.max_ticks) {
        return refused_word("max_percentile_ticks",
                            number_text(*rule.max_percentile_ticks) + " is above max_ticks (" +
                                number_text(*rule.max_ticks) + "), which no sample may exceed",
                            "lower it, or leave it out");
    }
    return rule;
}

}  // namespace halflsb
