#include "oracle/judge/latency_sigma.hpp"

#include <algorithm>

#include "oracle/judge/units.hpp"

namespace halflsb {

std::optional<double> allowed_rms(const Case& the_case, const Signal& signal, const DerivedLimits& derived) {
    std::optional<double> smallest;
    for (const Rule& rule : the_case.rules) {
        const auto* error = std::get_if<ErrorRule>(&rule.kind);
        if (error == nullptr) continue;
        const auto take = [&](const std::optional<Limit>& limit, double of_arithmetic) {
            if (!limit) return;
            const double value = value_of(*limit, signal, of_arithmetic);
            smallest = smallest ? std::min(*smallest, value) : value;
        };
        take(error->rms, derived.rms);
        take(error->largest, derived.error.largest());
    }
    return smallest;
}

double latency_sigma(const Case& the_case, const Signal& signal, const DerivedLimits& derived) {
    return std::max(finest_step(signal.output), allowed_rms(the_case, signal, derived).value_or(0.0));
}

}  // namespace halflsb
