#include "oracle/rules/crosstalk_rule.hpp"

namespace halflsb {

const Recipe& crosstalk_recipe() {
    static const Recipe recipe{
        "crosstalk",
        "What the other channels return while one is driven; give at least one limit.",
        {
            derivable_word("max_lsb", "LSB",
                           "Largest response of a channel that is not driven, less what zeros give there."),
            derivable_word("max_ratio", "of full scale",
                           "Largest response of a channel that is not driven, less what zeros give there."),
            derivable_word("max_unit", "unit",
                           "Largest response of a channel that is not driven, less what zeros give there."),
            {.name = "max_db",
             .unit = "dB",
             .minimum = -200.0,
             .maximum = 0.0,
             .help = "Amplitude with which the driven channel may come through, 0 dB being all of it."},
        }};
    return recipe;
}

Outcome<CrosstalkRule> make_crosstalk_rule(const ParameterValues& values, const RuleContext& context) {
    auto largest = read_limit(values, crosstalk_recipe(), largest_words, context);
    if (!largest) return largest.error();
    const CrosstalkRule rule{*largest, values.number(crosstalk_recipe(), "max_db")};
    if (!rule.largest && !rule.max_db) {
        return refused_word("kind", "a rule of kind \"crosstalk\" without a limit judges nothing",
                            "give max_lsb (or max_ratio, max_unit), max_db, or both");
    }
    return rule;
}

}  // namespace halflsb
