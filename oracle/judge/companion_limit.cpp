#include "oracle/judge/companion_limit.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/derived_limits.hpp"

namespace halflsb {

std::optional<double> derived_companion_limit(const Plan& plan, const Case& companion, int channel) {
    if (plan.filter_is_unknown || !companion.companion) return std::nullopt;
    const auto limits = derived_limits(plan, companion, channel);
    if (!limits) return std::nullopt;
    const double low = limits->error.lowest, high = limits->error.highest;
    double lowest = low, highest = high;
    for (const CompanionTerm& term : companion.companion->terms) {
        const double one = -static_cast<double>(term.gain) * low, other = -static_cast<double>(term.gain) * high;
        lowest += std::min(one, other);
        highest += std::max(one, other);
    }
    return std::max(std::fabs(lowest), std::fabs(highest));
}

}  // namespace halflsb
