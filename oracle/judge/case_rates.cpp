#include "oracle/judge/case_rates.hpp"

#include <algorithm>

namespace halflsb {
namespace {

FilterChain rate_stages(const Plan& plan, const Case& the_case, int channel) {
    const FilterChain& filter = the_case.filter ? *the_case.filter : plan.filter;
    FilterChain found;
    if (!changes_rate(filter)) return found;
    for (FilterStage& stage : chain_of_channel(filter, channel)) {
        if (rate_ratio(stage.design) != RateRatio{}) found.push_back(std::move(stage));
    }
    return found;
}

}  // namespace

RateCycle rate_cycle_of(const Plan& plan) { return rate_cycle(chain_of_channel(plan.filter, 1)); }

CaseRates::CaseRates(const Plan& plan, const Case& the_case)
    : stages_(rate_stages(plan, the_case, 1)), cycle_(rate_cycle(stages_)) {}

std::int64_t CaseRates::newest_sent(std::int64_t returned_index) const {
    if (!changes()) return returned_index;
    const std::int64_t cycles = returned_index / cycle_.outputs, index = returned_index % cycle_.outputs;
    std::int64_t low = 0, high = cycle_.inputs - 1;  // the first one after which more than `index` are there
    while (low < high) {
        const std::int64_t middle = low + (high - low) / 2;
        if (returned(middle + 1) > index) {
            high = middle;
        } else {
            low = middle + 1;
        }
    }
    return cycles * cycle_.inputs + low;
}

std::int64_t CaseRates::sent_for(std::int64_t returned) const {
    return (returned + cycle_.outputs - 1) / cycle_.outputs * cycle_.inputs;
}

std::int64_t CaseRates::whole_cycles(std::int64_t sent) const {
    return std::max<std::int64_t>((sent + cycle_.inputs - 1) / cycle_.inputs, 1) * cycle_.inputs;
}

std::int64_t CaseRates::cycles_within(std::int64_t samples) const {
    return std::max<std::int64_t>(samples / std::max(cycle_.inputs, cycle_.outputs), 1);
}

bool same_rates(const Plan& plan, const Case& the_case) {
    const FilterChain first = rate_stages(plan, the_case, 1);
    for (int channel = 2; channel <= plan.signal.channels; ++channel) {
        const FilterChain other = rate_stages(plan, the_case, channel);
        const auto same_way = [](const FilterStage& a, const FilterStage& b) {
            return rate_ratio(a.design) == rate_ratio(b.design) &&
                   phase_samples_of(a.design) == phase_samples_of(b.design);
        };
        if (!std::equal(first.begin(), first.end(), other.begin(), other.end(), same_way)) return false;
    }
    return true;
}

std::int64_t first_judged_sample(const Plan& plan, const Case& the_case) {
    return the_case.start == Start::running ? CaseRates(plan, the_case).returned(the_case.start_samples) : 0;
}

std::int64_t judged_samples(const Plan& plan, const Case& the_case) {
    return std::max<std::int64_t>(returned_samples(plan, the_case) - first_judged_sample(plan, the_case), 0);
}

std::int64_t returned_samples(const Plan& plan, const Case& the_case) {
    return CaseRates(plan, the_case).returned(the_case.stimulus->length_samples());
}

double returned_per_sent(const Plan& plan, const Case& the_case) {
    const RateRatio ratio = CaseRates(plan, the_case).ratio();
    return static_cast<double>(ratio.up) / ratio.down;
}

double returned_rate_hz(const Plan& plan, const Case& the_case) {
    const RateRatio ratio = CaseRates(plan, the_case).ratio();
    return rate_hz_of(plan, the_case) * ratio.up / ratio.down;
}

}  // namespace halflsb
