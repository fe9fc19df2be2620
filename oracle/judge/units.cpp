#include "oracle/judge/units.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

double worth_of(Limit::In in, const Signal& signal) {
    switch (in) {
        case Limit::In::lsb:
            return lsb_value(signal.output);
        case Limit::In::full_scale_ratio:
            return full_scale_value(signal.output);
        case Limit::In::unit:
            return full_scale_value(signal.output) / std::fabs(*signal.full_scale_unit);
    }
    return 1.0;
}

double value_of(const Limit& limit, const Signal& signal) { return limit.number * worth_of(limit.in, signal); }

std::string unit_name(Limit::In in, const Signal& signal) {
    switch (in) {
        case Limit::In::lsb:
            return "LSB";
        case Limit::In::full_scale_ratio:
            return "of full scale";
        case Limit::In::unit:
            return signal.unit.empty() ? "unit" : signal.unit;
    }
    return "";
}

Limit::In natural_unit(const Signal& signal) {
    return signal.output.has_lsb() ? Limit::In::lsb : Limit::In::full_scale_ratio;
}

std::optional<double> allowed_rms(const Case& the_case, const Signal& signal) {
    std::optional<double> smallest;
    for (const Rule& rule : the_case.rules) {
        const auto* error = std::get_if<ErrorRule>(&rule.kind);
        if (error == nullptr) continue;
        for (const auto& limit : {error->rms, error->largest}) {
            if (!limit) continue;
            const double value = value_of(*limit, signal);
            smallest = smallest ? std::min(*smallest, value) : value;
        }
    }
    return smallest;
}

double latency_sigma(const Case& the_case, const Signal& signal) {
    const double step =
        signal.output.has_lsb() ? lsb_value(signal.output) : std::ldexp(full_scale_value(signal.output), -24);
    return std::max(step, allowed_rms(the_case, signal).value_or(0.0));
}

}  // namespace halflsb
