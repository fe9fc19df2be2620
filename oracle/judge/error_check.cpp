#include <algorithm>
#include <cmath>

#include "oracle/judge/covered_arithmetic.hpp"
#include "oracle/judge/error_judge.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
void check(const ErrorRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    if (!is_derived(rule)) return;
    const double widest = full_scale_value(plan.signal.output);
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto chain = described_channel(plan, the_case, channel);
        if (!chain) return;  // the reader has refused it
        if (auto refusal = not_covered(asked, plan.signal, the_case, *chain)) {
            refusals.push_back(std::move(*refusal));
            return;
        }
        const auto limits = derived_limits(plan, the_case, channel);
        if (!limits) return;
        double wanted = 0.0;
        if (rule.largest && rule.largest->is_derived) wanted = limits->error.largest();
        if (rule.rms && rule.rms->is_derived) wanted = std::max(wanted, limits->worst_rms);
        if (rule.bias && rule.bias->is_derived) wanted = std::max(wanted, limits->worst_bias.largest());
        if (wanted <= widest) continue;
        refusals.push_back(too_wide(asked, plan.signal, the_case, wanted));
        return;
    }
}

}  // namespace halflsb
