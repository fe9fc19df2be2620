#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/filters/node_path.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/noise_judge.hpp"
#include "oracle/judge/tail.hpp"
#include "oracle/measure/noise_power.hpp"

namespace halflsb {
namespace {

/// Drawn independently from sample to sample, or a sequence that looks so over its period.
bool is_white(const Case& the_case) {
    return (the_case.shape == "noise" || the_case.shape == "prbs") && !the_case.stimulus_values.has("add");
}

}  // namespace

std::optional<double> white_noise_gain(const Plan& plan, const Case& the_case, int channel) {
    const FilterChain chain = from_rest(chain_of(plan, the_case, channel));
    if (!is_linear(chain) || CaseRates(plan, the_case).changes()) return std::nullopt;
    return noise_power_gain(chain) * plan.signal.output_per_input * plan.signal.output_per_input;
}

std::int64_t noise_samples_needed(const Plan& plan, const Case& the_case, int channel) {
    constexpr double times = 200.0;
    double remembered = static_cast<double>(tail_samples(plan, the_case, channel).value_or(0) + 1);
    const FilterChain chain = from_rest(chain_of(plan, the_case, channel));
    if (is_linear(chain) && !CaseRates(plan, the_case).changes()) {
        const double sum = l1_norm(chain), squares = noise_power_gain(chain);
        if (squares > 0.0) remembered = sum * sum / squares;
    }
    // Not a sample more because a sum is a rounding above a whole number.
    const double needed = std::ceil(times * remembered * (1.0 - 1e-9));
    return std::max(static_cast<std::int64_t>(std::min(needed, 0x1p62)), noise_least_samples);
}

void check(const NoiseRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    if (!is_white(the_case)) {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" cannot answer a noise rule with shape = \"" +
                                the_case.shape + "\"" + (the_case.stimulus_values.has("add") ? " and add" : "") +
                                ": the gain is that of white noise",
                            "use shape = \"noise\""});
        return;
    }
    const CaseRates rates(plan, the_case);
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!is_driven(the_case, channel)) continue;
        const auto tail = tail_samples(plan, the_case, channel);
        if (!tail) {
            refusals.push_back({asked.position,
                                "nothing says when the filter has settled in case \"" + the_case.name +
                                    "\": 2^24 samples are not enough",
                                "leave the rule out; rules about error and exact hold"});
            return;
        }
        const std::int64_t settled = std::max(rates.returned(*tail), first_judged_sample(plan, the_case)) +
                                     std::max(expected_lag_of(the_case), 0);
        const std::int64_t left = returned_samples(plan, the_case) - settled;
        const std::int64_t needed = noise_samples_needed(plan, the_case, channel);
        if (left >= needed) continue;
        refusals.push_back(
            {asked.position,
             "case \"" + the_case.name +
                 "\" is too short for a noise power: " + std::to_string(std::max<std::int64_t>(left, 0)) +
                 " samples are left once the filter has settled, and " + std::to_string(needed) + " are needed",
             "give it at least " + std::to_string(rates.sent_for(settled + needed)) + " samples"});
        return;
    }
}

}  // namespace halflsb
