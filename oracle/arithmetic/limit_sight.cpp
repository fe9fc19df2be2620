#include "oracle/arithmetic/limit_sight.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/port_values.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/arithmetic/twin.hpp"

namespace halflsb {

namespace {

/// Nine digits, as figures are judged, are the same.
bool exceeds(double figure, double limit) { return !(figure <= limit * (1.0 + 1e-9)); }

}  // namespace

LimitSight sight_of(const DescribedChain& promised, const DescribedChain& changed, std::span<const Code> codes,
                    BoundUse use) {
    LimitSight sight;
    const auto twin = make_twin(changed);
    if (!twin || !make_twin(promised)) return sight;
    const std::size_t count = codes.size();
    std::vector<double> values(count), reference(count), response(count);
    std::vector<Code> returned(twin->outputs_for(count));
    if (returned.size() != count) return sight;
    values_at(promised.stages.front().in, codes, values);
    twin->process(codes, returned);
    values_at(changed.stages.back().out, returned, response);
    make_declared_filter(promised, 1.0)->process(values, reference);

    RailWatch watch(promised);
    std::vector<std::uint8_t> exempt(count);
    watch.add(values, exempt);
    sight.judged = watch.first_unsafe_index().value_or(static_cast<std::int64_t>(count));
    if (sight.judged == 0) return sight;
    use.samples = sight.judged;
    if (watch.first_clip_index().value_or(sight.judged) < sight.judged) use.noise_like = false;
    sight.limits = derive(promised, use);

    double sum = 0.0, squares = 0.0, worst = 0.0;
    for (std::size_t n = 0; n < static_cast<std::size_t>(sight.judged); ++n) {
        const double error = response[n] - reference[n];
        sum += error;
        squares += error * error;
        worst = std::max(worst, std::fabs(error));
    }
    const auto judged = static_cast<double>(sight.judged);
    sight.largest = worst;
    sight.rms = std::sqrt(squares / judged);
    sight.bias = sum / judged;
    if (exceeds(sight.largest, sight.limits.largest())) {
        sight.by = "largest";
    } else if (exceeds(sight.rms, sight.limits.rms)) {
        sight.by = "rms";
    } else if (exceeds(std::fabs(sight.bias), sight.limits.bias())) {
        sight.by = "bias";
    }
    sight.is_seen = !sight.by.empty();
    return sight;
}

bool sees(const DescribedChain& promised, const DescribedChain& changed, std::span<const Code> codes,
          const BoundUse& use) {
    return sight_of(promised, changed, codes, use).is_seen;
}

}  // namespace halflsb
