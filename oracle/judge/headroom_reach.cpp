#include "oracle/judge/headroom_reach.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/every_word.hpp"
#include "oracle/arithmetic/node_impulse.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/judge/derived_limits.hpp"

namespace halflsb {
namespace {

constexpr std::size_t impulse_samples = 4096;
constexpr std::int64_t most_looked_at = reach_samples;

std::vector<double> stimulus_values(const Plan& plan, const Case& the_case) {
    const auto count = static_cast<std::size_t>(std::min(the_case.stimulus->length_samples(), most_looked_at));
    std::vector<Code> codes(count);
    std::vector<double> values(count);
    fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, 0, codes);
    values_of(plan.signal.input, codes, values);
    return values;
}

/// Without the end that comes to less than a ten-thousandth of the sum: it moves no ratio that is told.
std::vector<double> cut(std::vector<double> h) {
    double sum = 0.0, left = 0.0;
    for (const double tap : h) sum += std::fabs(tap);
    while (!h.empty() && left + std::fabs(h.back()) <= 1e-4 * sum) {
        left += std::fabs(h.back());
        h.pop_back();
    }
    return h;
}

}  // namespace

std::vector<DrivenNode> driven_nodes(const Plan& plan, const Case& the_case, int channel) {
    std::vector<DrivenNode> reaches;
    const auto described = described_channel(plan, the_case, channel);
    if (!described) return reaches;
    const DescribedChain chain = with_every_word(*described);
    const std::vector<double> values = stimulus_values(plan, the_case);
    std::vector<double> at_node(values.size());
    const RailWatch watch(chain);
    for (const RailNode& node : watch.nodes()) {
        const std::vector<double> h = cut(node_impulse(chain, node.name, impulse_samples));
        if (h.empty() || !(node.worst_case > 0.0) || !std::isfinite(node.worst_case)) continue;
        make_filter({FilterStage{Fir{h}, std::nullopt}})->process(values, at_node);
        double largest = 0.0;
        for (const double value : at_node) largest = std::max(largest, std::fabs(value));
        reaches.push_back({node.name, largest / node.worst_case});
    }
    return reaches;
}

}  // namespace halflsb
