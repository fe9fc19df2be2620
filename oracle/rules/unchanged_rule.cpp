#include "oracle/rules/unchanged_rule.hpp"

namespace halflsb {

const Recipe& unchanged_recipe() {
    static const Recipe recipe{
        "unchanged",
        "The response equals that of an accepted run (halflsb accept); needs no oracle.",
        {
            {.name = "baseline",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 200,
             .help = "Folder of the baseline, below the root; \"baseline\" when left out."},
            limit_word("max_lsb", "LSB", "Largest difference allowed; none when left out: bit for bit."),
        }};
    return recipe;
}

Outcome<UnchangedRule> make_unchanged_rule(const ParameterValues& values, const RuleContext& context) {
    UnchangedRule rule;
    rule.baseline = values.text(unchanged_recipe(), "baseline").value_or("baseline");
    auto largest = read_limit(values, unchanged_recipe(), largest_words, context);
    if (!largest) return largest.error();
    rule.largest = *largest;
    return rule;
}

}  // namespace halflsb
