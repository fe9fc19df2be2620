#include "oracle/judge/tail.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/leftover.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// Small taps at the end are below half a step, and a floor makes a whole one of them.
std::int64_t forgotten_at_start(const DescribedChain& chain) {
    std::int64_t all = 0;
    for (const DescribedStage& stage : chain.stages) {
        const auto samples = samples_to_forget(stage);
        if (!samples) break;
        all += *samples;
    }
    return all;
}

}  // namespace

std::optional<std::int64_t> tail_samples(const Plan& plan, const Case& the_case, int channel) {
    const Signal& signal = plan.signal;
    const FilterChain design = from_rest(chain_of(plan, the_case, channel));
    const double full_scale = full_scale_value(signal.input) * std::fabs(signal.output_per_input);
    std::int64_t most = 0;
    for (const FilterChain& chain : {design, declared_chain(design)}) {
        const auto samples = flush_samples(chain, full_scale, finest_step(signal.output) / 2.0);
        if (!samples) return std::nullopt;
        most = std::max(most, *samples);
    }
    const CaseRates rates(plan, the_case);
    if (rates.changes()) return rates.whole_cycles(most);
    if (const auto described = described_channel(plan, the_case, channel))
        most = std::max(most, forgotten_at_start(*described));
    return most;
}

}  // namespace halflsb
