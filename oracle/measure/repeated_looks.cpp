#include "oracle/measure/repeated_looks.hpp"

#include <algorithm>

#include "oracle/measure/quantile.hpp"

namespace halflsb {

RepeatedLooks::RepeatedLooks(std::int64_t first_samples, std::int64_t step_samples, std::int64_t budget_samples) {
    std::int64_t look = first_samples;
    while (look < budget_samples) {
        at_samples_.push_back(look);
        const std::int64_t quarter = (look / 4 + step_samples - 1) / step_samples;
        look += std::max<std::int64_t>(quarter, 1) * step_samples;
    }
    at_samples_.push_back(budget_samples);
}

double fixed_length_samples(double alpha, double beta, double delta, double deviation, double samples) {
    const double z = (normal_quantile_above(alpha) + normal_quantile_above(beta)) * deviation / delta;
    return z * z * samples;
}

}  // namespace halflsb
