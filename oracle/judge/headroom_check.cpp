#include <algorithm>
#include <optional>
#include <string>

#include "oracle/filters/rates.hpp"
#include "oracle/judge/covered_arithmetic.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/headroom_judge.hpp"
#include "oracle/judge/headroom_reach.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// What stands in the way on one channel, whatever the stimulus.
std::optional<Refusal> why_not(const Rule& asked, const Plan& plan, const Case& the_case, int channel,
                               const DescribedChain& described) {
    const FilterChain chain = chain_of(plan, the_case, channel);
    if (!is_linear(chain) || changes_rate(chain) || !plan.signal.input.has_lsb()) {
        const std::string why = !is_linear(chain)     ? "a median has no impulse response"
                                : changes_rate(chain) ? "the filter changes the rate"
                                                      : "an f32 input has no largest code";
        return Refusal{asked.position, "nobody knows which stimulus drives a node the hardest: " + why,
                       "leave the rule out; rules about error and exact hold"};
    }
    if (auto refusal = not_covered(asked, plan.signal, the_case, described)) return refusal;
    const auto derived = derived_limits(plan, the_case, channel);
    if (derived && derived->error.largest() > full_scale_value(plan.signal.output))
        return too_wide(asked, plan.signal, the_case, derived->error.largest());
    return std::nullopt;
}

}  // namespace

void check(const HeadroomRule&, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    DrivenNode furthest;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!is_driven(the_case, channel)) continue;
        const auto described = described_channel(plan, the_case, channel);
        if (!described) return;  // the reader has refused it
        if (auto refusal = why_not(asked, plan, the_case, channel, *described)) {
            refusals.push_back(std::move(*refusal));
            return;
        }
        for (const DrivenNode& reach : driven_nodes(plan, the_case, channel)) {
            if (reach.ratio >= driven_least_ratio) return;
            if (reach.ratio > furthest.ratio) furthest = reach;
        }
    }
    const std::string most = furthest.node.empty()
                                 ? "drives none"
                                 : "drives " + furthest.node + " the furthest, to " + brief(100.0 * furthest.ratio) +
                                       " % of the worst that any input can do";
    refusals.push_back({asked.position,
                        "case \"" + the_case.name + "\" drives no node of the filter to its worst: shape = \"" +
                            the_case.shape + "\" " + most + ", and " + brief(100.0 * driven_least_ratio) +
                            " % are needed in its first " + std::to_string(reach_samples) + " samples",
                        "use shape = \"signs\" at level_ratio = 1.0, with the signs that halflsb predict gives for the "
                        "node"});
}

}  // namespace halflsb
