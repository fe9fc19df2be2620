#include "oracle/judge/derived_limits.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/limit_store.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {

BoundUse bound_use(const Plan& plan, const Case& the_case, int channel) {
    return plan.limits->bound_use(plan, the_case, channel);
}

std::optional<DescribedChain> described_channel(const Plan& plan, const Case& the_case, int channel) {
    return plan.limits->described(plan, the_case, channel);
}

std::optional<ErrorBound> judged_bound(const Plan& plan, const Case& the_case, int channel) {
    return plan.limits->judged_bound(plan, the_case, channel);
}

std::optional<DerivedLimits> derived_limits(const Plan& plan, const Case& the_case, int channel) {
    const auto bound = judged_bound(plan, the_case, channel);
    if (!bound) return std::nullopt;
    const double gain = plan.signal.output_per_input, size = gain < 0.0 ? -gain : gain;
    const auto ends = [gain](double lower, double upper) {
        return gain < 0.0 ? ErrorEnds{gain * upper, gain * lower} : ErrorEnds{gain * lower, gain * upper};
    };
    return DerivedLimits{ends(bound->lower, bound->upper), size * bound->rms,
                         ends(bound->bias_lower, bound->bias_upper), size * bound->worst_rms,
                         ends(bound->clipped_bias_lower, bound->clipped_bias_upper)};
}

std::optional<ErrorEnds> derived_silence(const Plan& plan, const Case& the_case, int channel) {
    const auto bound = plan.limits->silence_bound(plan, the_case, channel);
    if (!bound) return std::nullopt;
    const Signal& signal = plan.signal;
    const double gain = signal.output_per_input, tail = finest_step(signal.output) / 2.0;
    const double one = gain * bound->lower, other = gain * bound->upper;
    ErrorEnds ends{std::min(one, other) - tail, std::max(one, other) + tail};
    if (!signal.output.has_lsb()) return ends;
    // Sums are run to 1e-12 of themselves: a code that lies on the bound counts. + 0.0: no end is -0.
    const double lsb = lsb_value(signal.output), slack = 1.0 + 1e-9;
    return ErrorEnds{std::ceil(ends.lowest / lsb * slack) * lsb + 0.0, std::floor(ends.highest / lsb * slack) * lsb};
}

bool is_derived(const ErrorRule& rule) {
    const auto derived = [](const std::optional<Limit>& limit) { return limit && limit->is_derived; };
    return derived(rule.largest) || derived(rule.rms) || derived(rule.bias);
}

DerivedLimits asked_limits(const Plan& plan, const Case& the_case, int channel) {
    const bool is_asked = std::any_of(the_case.rules.begin(), the_case.rules.end(), [](const Rule& rule) {
        const auto* error = std::get_if<ErrorRule>(&rule.kind);
        return error != nullptr && is_derived(*error);
    });
    return is_asked ? derived_limits(plan, the_case, channel).value_or(DerivedLimits{}) : DerivedLimits{};
}

double value_of(const Limit& limit, const Signal& signal, double derived) {
    return limit.is_derived ? derived : value_of(limit, signal);
}

}  // namespace halflsb
