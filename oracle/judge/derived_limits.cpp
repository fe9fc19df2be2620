#include "oracle/judge/derived_limits.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/leftover.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t rms_samples = 65536;

/// Only what is drawn independently from sample to sample is white.
bool is_white_noise(const Case& the_case) { return the_case.shape == "noise" && !the_case.stimulus_values.has("add"); }

double rms_of_input(const Plan& plan, const Case& the_case) {
    const auto count = static_cast<std::size_t>(std::min(the_case.stimulus->length_samples(), rms_samples));
    std::vector<Code> codes(count);
    std::vector<double> values(count);
    fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, 0, codes);
    values_of(plan.signal.input, codes, values);
    double sum = 0.0;
    for (const double value : values) sum += value * value;
    return std::sqrt(sum / static_cast<double>(count));
}

}  // namespace

BoundUse bound_use(const Plan& plan, const Case& the_case, int channel) {
    BoundUse use;
    use.samples = std::max<std::int64_t>(judged_samples(plan, the_case), 1);
    use.noise_like = is_driven(the_case, channel) && is_white_noise(the_case);
    if (use.noise_like) use.input_rms = rms_of_input(plan, the_case);
    return use;
}

std::optional<DescribedChain> described_channel(const Plan& plan, const Case& the_case, int channel) {
    const Signal& signal = plan.signal;
    return describe(chain_of(plan, the_case, channel), signal.input, signal.output, signal.output_per_input).described;
}

std::optional<DerivedLimits> derived_limits(const Plan& plan, const Case& the_case, int channel) {
    const auto chain = described_channel(plan, the_case, channel);
    if (!chain) return std::nullopt;
    const double gain = std::fabs(plan.signal.output_per_input);
    const ErrorBound bound = derive(*chain, bound_use(plan, the_case, channel));
    const Leftover left = leftover(*chain, plan, the_case);
    return DerivedLimits{gain * (bound.largest() + left.largest), gain * (bound.rms + left.rms),
                         gain * (bound.bias() + left.bias), gain * (bound.worst_rms + left.rms),
                         gain * (bound.worst_bias() + left.bias)};
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
