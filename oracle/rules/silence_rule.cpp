#include "oracle/rules/silence_rule.hpp"

namespace halflsb {

const Recipe& silence_recipe() {
    static const Recipe recipe{
        "silence",
        "What remains once the stimulus has ended and the design's tail has died away: limit cycle, dead band, stuck "
        "value. Give one limit.",
        {
            derivable_word("max_lsb", "LSB", "Largest size of what remains, in steps of the output format."),
            derivable_word("max_ratio", "of full scale",
                           "Largest size of what remains, as a fraction of the output's full scale."),
            derivable_word("max_unit", "unit", "Largest size of what remains, in the unit of [signal]."),
        }};
    return recipe;
}

Outcome<SilenceRule> make_silence_rule(const ParameterValues& values, const RuleContext& context) {
    auto largest = read_limit(values, silence_recipe(), largest_words, context);
    if (!largest) return largest.error();
    if (!*largest) {
        return refused_word("kind", "a rule of kind \"silence\" without a limit judges nothing",
                            "give max_lsb (or max_ratio, max_unit); \"derived\" takes it from the arithmetic");
    }
    return SilenceRule{*largest};
}

}  // namespace halflsb
