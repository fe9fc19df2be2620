#include "oracle/rules/latency_rule.hpp"

#include "oracle/measure/lag.hpp"

namespace halflsb {

const Recipe& latency_recipe() {
    static const Recipe recipe{
        "latency",
        "Whole-sample delay of the response behind the reference; the filter's own delay is not latency.",
        {
            {.name = "latency_samples",
             .type = ParameterType::integer,
             .unit = "samples",
             .minimum = -lag_window_samples,
             .maximum = lag_window_samples,
             .required = true,
             .help = "The delay that is right; every case without this rule is held to 0."},
            {.name = "max_fraction_samples",
             .unit = "samples",
             .minimum = 0.0,
             .maximum = 1.0,
             .above_minimum = true,
             .help = "Largest delay beside the whole samples, either way, from the slope of the phase; needs noise or "
                     "a prbs."},
        }};
    return recipe;
}

Outcome<LatencyRule> make_latency_rule(const ParameterValues& values, const RuleContext&) {
    LatencyRule rule;
    rule.expected_samples = static_cast<int>(*values.integer(latency_recipe(), "latency_samples"));
    rule.max_fraction_samples = values.number(latency_recipe(), "max_fraction_samples");
    return rule;
}

}  // namespace halflsb
