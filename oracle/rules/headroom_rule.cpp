#include "oracle/rules/headroom_rule.hpp"

namespace halflsb {

const Recipe& headroom_recipe() {
    constexpr double most = 4503599627370496.0;  // 2^52
    static const Recipe recipe{
        "headroom",
        "Under the stimulus that drives a node of the filter the hardest nothing wraps, and nothing clips that was not "
        "declared to.",
        {
            {.name = "max_clipped_samples",
             .type = ParameterType::integer,
             .unit = "samples",
             .minimum = 0.0,
             .maximum = most,
             .default_value = HeadroomRule{}.max_clipped_samples,
             .help = "Samples that may be cut off short of the declared reference."},
            {.name = "max_wrapped_samples",
             .type = ParameterType::integer,
             .unit = "samples",
             .minimum = 0.0,
             .maximum = most,
             .default_value = HeadroomRule{}.max_wrapped_samples,
             .help = "Samples that may jump away from the declared reference as a word does that wraps."},
        }};
    return recipe;
}

Outcome<HeadroomRule> make_headroom_rule(const ParameterValues& values, const RuleContext& context) {
    if (!context.output_has_lsb) {
        return refused_word("kind", "an f32 output neither wraps nor clips", "leave the rule out");
    }
    return HeadroomRule{*values.number(headroom_recipe(), "max_clipped_samples"),
                        *values.number(headroom_recipe(), "max_wrapped_samples")};
}

}  // namespace halflsb
