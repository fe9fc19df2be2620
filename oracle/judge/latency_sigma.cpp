#include "oracle/judge/latency_sigma.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {

std::optional<double> allowed_rms(const Plan& plan, const Case& the_case, int channel) {
    std::optional<double> smallest;
    std::optional<DerivedLimits> derived;
    for (const Rule& rule : the_case.rules) {
        const auto* error = std::get_if<ErrorRule>(&rule.kind);
        if (error == nullptr) continue;
        if (is_derived(*error) && !derived) derived = derived_limits(plan, the_case, channel).value_or(DerivedLimits{});
        const auto take = [&](const std::optional<Limit>& limit, double of_arithmetic) {
            if (!limit) return;
            const double value = value_of(*limit, plan.signal, of_arithmetic);
            smallest = smallest ? std::min(*smallest, value) : value;
        };
        take(error->rms, derived ? derived->rms : 0.0);
        take(error->largest, derived ? derived->largest : 0.0);
    }
    return smallest;
}

double latency_sigma(const Plan& plan, const Case& the_case, int channel) {
    const SampleFormat& output = plan.signal.output;
    const double step = output.has_lsb() ? lsb_value(output) : std::ldexp(full_scale_value(output), -24);
    return std::max(step, allowed_rms(plan, the_case, channel).value_or(0.0));
}

}  // namespace halflsb
