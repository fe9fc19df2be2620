#include "oracle/filters/rates.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace halflsb {

namespace {

constexpr std::int64_t largest_term = std::int64_t{1} << 30;

RateRatio ratio_of(const CicDecimator& design) { return {1, design.factor}; }
RateRatio ratio_of(const FirDecimator& design) { return {1, design.factor}; }
RateRatio ratio_of(const CicInterpolator& design) { return {design.factor, 1}; }
RateRatio ratio_of(const FirInterpolator& design) { return {design.factor, 1}; }
template <class Design>
RateRatio ratio_of(const Design&) {
    return {};
}

template <class Design>
int phase_of(const Design& design) {
    if constexpr (requires { design.phase_samples; }) return design.phase_samples;
    return 0;
}

// ceil(log2 of factor^power times rest), exact while the product is below 2^63.
int bits_of(double gain) {
    int exponent = 0;
    const double mantissa = std::frexp(gain, &exponent);
    return mantissa == 0.5 ? exponent - 1 : exponent;
}

}  // namespace

RateRatio rate_ratio(const FilterDesign& design) {
    return std::visit([](const auto& kind) { return ratio_of(kind); }, design);
}

int phase_samples_of(const FilterDesign& design) {
    return std::visit([](const auto& kind) { return phase_of(kind); }, design);
}

RateRatio rate_ratio(const FilterChain& chain) {
    std::int64_t up = 1, down = 1;
    for (const FilterStage& stage : chain) {
        const RateRatio own = rate_ratio(stage.design);
        up *= own.up;
        down *= own.down;
        const std::int64_t common = std::gcd(up, down);
        up = std::min(up / common, largest_term);
        down = std::min(down / common, largest_term);
    }
    return {static_cast<int>(up), static_cast<int>(down)};
}

bool changes_rate(const FilterChain& chain) {
    return std::any_of(chain.begin(), chain.end(),
                       [](const FilterStage& stage) { return rate_ratio(stage.design) != RateRatio{}; });
}

double output_rate_hz(const FilterStage& stage, double input_rate_hz) {
    const RateRatio ratio = rate_ratio(stage.design);
    return input_rate_hz * ratio.up / ratio.down;
}

std::int64_t outputs_after(const FilterChain& chain, std::int64_t inputs) {
    for (const FilterStage& stage : chain) {
        const RateRatio ratio = rate_ratio(stage.design);
        const int waits_for = ratio.down - 1 - phase_samples_of(stage.design);
        inputs = ratio.down > 1 ? (inputs + waits_for) / ratio.down : inputs * ratio.up;
    }
    return inputs;
}

RateCycle rate_cycle(const FilterChain& chain) {
    RateCycle cycle;
    for (const FilterStage& stage : chain) {
        const RateRatio own = rate_ratio(stage.design);
        // As many rounds as let a whole number of them into the decimator's factor.
        const std::int64_t rounds = own.down / std::gcd<std::int64_t>(cycle.outputs, own.down);
        cycle.inputs = std::min(cycle.inputs * rounds, largest_term);
        cycle.outputs = std::min(cycle.outputs * rounds / own.down * own.up, largest_term);
    }
    return cycle;
}

int growth_bits(const CicDecimator& design) {
    return bits_of(std::pow(design.factor * design.delay_samples, design.order));
}

int growth_bits(const CicInterpolator& design) {
    // Behind comb j: 2^j; behind integrator j: 2^(N-j) (R M)^j / R.
    const double window = design.factor * design.delay_samples;
    double largest = std::ldexp(1.0, design.order);
    for (int j = 1; j <= design.order; ++j)
        largest = std::max(largest, std::ldexp(std::pow(window, j), design.order - j) / design.factor);
    return bits_of(largest);
}

}  // namespace halflsb
