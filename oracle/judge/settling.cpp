#include "oracle/judge/settling.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/limit_store.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {

std::optional<std::int64_t> settling_samples(const Plan& plan, const Case& the_case, int channel) {
    const Signal& signal = plan.signal;
    // A case that goes on from another one may find its filter at the other end of the scale, else it finds zeros.
    const double scales = the_case.start == Start::running ? 2.0 : 1.0;
    const double full_scale = scales * full_scale_value(signal.input) * std::fabs(signal.output_per_input);
    return plan.limits->settling_samples(plan, the_case, channel, full_scale, finest_step(signal.output) / 16.0);
}

std::optional<std::int64_t> first_settled_sample(const Plan& plan, const Case& the_case, int channel, std::int64_t from,
                                                 int lag_samples) {
    const auto settling = settling_samples(plan, the_case, channel);
    if (!settling) return std::nullopt;
    const std::int64_t settled = CaseRates(plan, the_case).returned(from + *settling);
    return std::max(first_judged_sample(plan, the_case), settled) + std::max(lag_samples, 0);
}

}  // namespace halflsb
