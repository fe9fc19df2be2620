#include "oracle/judge/latency_evidence.hpp"

#include <algorithm>
#include <bit>
#include <cstdlib>
#include <set>
#include <vector>

#include "oracle/filters/channel_stages.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/latency_sigma.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/sent_block.hpp"

namespace halflsb {
namespace {

/// Driven channels, of those that pass the same stages only the first: the others have the same evidence.
std::vector<int> channels_to_look_at(const Plan& plan, const Case& the_case) {
    const FilterChain& stages = the_case.filter ? *the_case.filter : plan.filter;
    std::vector<int> found;
    std::set<std::vector<std::size_t>> seen;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!is_driven(the_case, channel)) continue;
        if (seen.insert(stages_of_channel(stages, channel)).second) found.push_back(channel);
    }
    return found;
}

LatencyEvidence evidence_of(const Plan& plan, const Case& the_case, int channel) {
    LatencyEvidence evidence;
    evidence.channel = plan.signal.channels == 1 ? 0 : channel;
    const CaseRates rates(plan, the_case);
    const std::int64_t most = latency_evidence_samples(chain_of(plan, the_case, channel));
    evidence.samples = std::min(the_case.stimulus->length_samples(), rates.whole_cycles(most));
    evidence.window = lag_window_for(rates.returned(evidence.samples) - first_judged_sample(plan, the_case));
    evidence.expected_is_outside = std::abs(expected_lag_of(the_case)) > lag_window_of(plan, the_case);
    const double sigma = latency_sigma(the_case, plan.signal, asked_limits(plan, the_case, channel));
    LagDiscrimination discrimination(evidence.window, first_lag_sample(plan, the_case, evidence.window));
    ReferenceSource reference(plan, the_case, channel, {});
    SentBlock sent(plan, the_case);
    bool has_enough = false;
    const std::int64_t block = rates.cycles_within(judge_block_samples) * rates.cycle().inputs;
    for (std::int64_t first = 0; first < evidence.samples && !has_enough;) {
        const auto count = std::min(block, evidence.samples - first);
        sent.take(first, static_cast<std::size_t>(count));
        discrimination.add(reference.next(sent.of_channel(channel)).declared);
        evidence.smallest_ratio = discrimination.smallest() / (sigma * sigma);
        has_enough = evidence.smallest_ratio >= latency_evidence_ratio;
        first += count;
    }
    evidence.hardest_lag = discrimination.hardest_lag();
    evidence.can_tell = has_enough && !evidence.expected_is_outside;
    return evidence;
}

}  // namespace

std::int64_t latency_evidence_samples(const FilterChain& filter) {
    std::uint64_t operations_a_sample = 2 * lag_window_samples + 1;
    for (const FilterStage& stage : filter) {
        if (const auto* fir = std::get_if<Fir>(&stage.design)) operations_a_sample += fir->taps.size();
        if (const auto* cascade = std::get_if<BiquadCascade>(&stage.design))
            operations_a_sample += 5 * cascade->sections.size();
    }
    constexpr std::uint64_t operations = std::uint64_t{1} << 30, fewest = std::uint64_t{1} << 14,
                            most = std::uint64_t{1} << 22;
    return static_cast<std::int64_t>(std::clamp(std::bit_floor(operations / operations_a_sample), fewest, most));
}

int lag_window_of(const Plan& plan, const Case& the_case) { return lag_window_for(judged_samples(plan, the_case)); }

std::int64_t first_lag_sample(const Plan& plan, const Case& the_case, int window) {
    const std::int64_t first = first_judged_sample(plan, the_case);
    return first == 0 ? 0 : first + window;
}

int expected_lag_of(const Case& the_case) {
    for (const Rule& rule : the_case.rules) {
        if (const auto* latency = std::get_if<LatencyRule>(&rule.kind)) return latency->expected_samples;
    }
    return 0;
}

LatencyEvidence latency_evidence(const Plan& plan, const Case& the_case) {
    LatencyEvidence least;
    if (plan.filter_is_unknown) return least;
    bool is_first = true;
    for (const int channel : channels_to_look_at(plan, the_case)) {
        const LatencyEvidence evidence = evidence_of(plan, the_case, channel);
        // A channel that can tell stops at the first block that is enough: its ratio says no more than that.
        const bool is_less =
            evidence.can_tell != least.can_tell ? !evidence.can_tell : evidence.smallest_ratio < least.smallest_ratio;
        if (is_first || is_less) least = evidence;
        is_first = false;
    }
    return least;
}

}  // namespace halflsb
