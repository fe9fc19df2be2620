// Sums over an impulse response: of its squares, and of its two signs.
#include <cmath>
#include <cstdint>
#include <optional>

#include "oracle/filters/exact_sums.hpp"
#include "oracle/filters/impulse_run.hpp"
#include "oracle/filters/memory.hpp"
#include "oracle/filters/node_path.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t most_samples = std::int64_t{1} << 24;
constexpr auto piece_samples = static_cast<std::int64_t>(ImpulseRun::piece_samples);
constexpr double unit_share = 1e-15;  // of the sum of squares, left to what is not computed

// With n+ = b0 + b1 + b2, n- = b0 - b1 + b2, p+ = 1 + a1 + a2, p- = 1 - a1 + a2:
//     sum h^2 = (n+ p- - n- p+)^2 / (4 (1 - a2^2) p+ p-) + (b0 + b2)^2 / (2 (1 + a2)) + (b0 - b2)^2 / (2 (1 - a2)).
// This is the integral of Astrom (1970), Introduction to Stochastic Control Theory, chapter 5 (from memory),
// rearranged so that only terms that are not negative are added.
double noise_of(const BiquadSection& s) {
    const double numerator_at_0 = sum_of_three(s.b0, s.b1, s.b2), numerator_at_half = sum_of_three(s.b0, -s.b1, s.b2);
    const double at_0 = sum_of_three(1.0, s.a1, s.a2), at_half = sum_of_three(1.0, -s.a1, s.a2);
    const double product = numerator_at_half * at_0;
    const double cross =
        difference_of_product(-product, -numerator_at_0, at_half) - std::fma(numerator_at_half, at_0, -product);
    const double fast = 1.0 + s.a2, slow = 1.0 - s.a2, even = s.b0 + s.b2, odd = s.b0 - s.b2;
    // Divided one after the other: the product of three small numbers need not be a normal one.
    return cross / at_0 * (cross / at_half) / (4.0 * fast * slow) + even * even / (2.0 * fast) +
           odd * odd / (2.0 * slow);
}

double noise_of(const Comb& comb) {
    const double second = difference_of_product(comb.forward, comb.direct, comb.feedback);
    return comb.direct * comb.direct + second * second / ((1.0 - comb.feedback) * (1.0 + comb.feedback));
}

double noise_of(const Fir& fir) {
    double sum = 0.0;
    for (const double tap : fir.taps) sum += tap * tap;
    return sum;
}

std::optional<double> closed_noise(const FilterChain& chain) {
    if (chain.empty()) return 1.0;
    if (chain.size() > 1) return std::nullopt;
    const FilterDesign& design = chain.front().design;
    if (const auto* average = std::get_if<MovingAverage>(&design)) return 1.0 / average->points;
    if (const auto* fir = std::get_if<Fir>(&design)) return noise_of(*fir);
    if (const auto* comb = std::get_if<Comb>(&design)) return noise_of(*comb);
    const auto* cascade = std::get_if<BiquadCascade>(&design);
    if (cascade != nullptr && cascade->sections.size() == 1) return noise_of(cascade->sections.front());
    return std::nullopt;
}

// What a sum that shrinks by `quarter_decay` in each quarter of most_samples still has to come.
double rest_of_series(double last_quarter, double quarter_decay) {
    return quarter_decay < 1.0 ? last_quarter * quarter_decay / (1.0 - quarter_decay) : no_limit;
}

double quarter_decay(const FilterChain& chain, double power) {
    return std::exp(0.25 * power * static_cast<double>(most_samples) * std::log(largest_pole_radius(chain)));
}

double sum_of_squares(std::span<const double> piece) {
    double sum = 0.0;
    for (const double h : piece) sum += h * h;
    return sum;
}

SignedSums sums_of_signs(std::span<const double> piece) {
    SignedSums sums;
    for (const double h : piece) (h > 0.0 ? sums.positive : sums.negative) += h;
    return sums;
}

}  // namespace

double dc_gain(const FilterChain& chain) { return response_at(chain, 0.0).real(); }

double noise_power_gain(const FilterChain& chain) {
    if (const auto closed = closed_noise(chain)) return *closed;
    ImpulseRun run(chain);
    double sum = 0.0, last_quarter = 0.0;
    for (std::int64_t samples = 0; samples < most_samples; samples += piece_samples) {
        const double part = sum_of_squares(run.next());
        sum += part;
        if (samples >= most_samples - most_samples / 4) last_quarter += part;
        const double rest = run.rest();  // of sum |h|, whose square is the more
        if (rest * rest <= unit_share * sum) return sum;
    }
    return sum + rest_of_series(last_quarter, quarter_decay(chain, 2.0));
}

double l2_norm(const FilterChain& chain) { return std::sqrt(noise_power_gain(chain)); }

SignedSums signed_sums(const FilterChain& chain, double tail) {
    ImpulseRun run(chain);
    SignedSums sum, last_quarter;
    for (std::int64_t samples = 0; samples < most_samples; samples += piece_samples) {
        const SignedSums part = sums_of_signs(run.next());
        sum.positive += part.positive;
        sum.negative += part.negative;
        if (samples >= most_samples - most_samples / 4) {
            last_quarter.positive += part.positive;
            last_quarter.negative += part.negative;
        }
        if (run.rest() <= tail * (sum.positive - sum.negative)) return sum;
    }
    const double decay = quarter_decay(chain, 1.0);
    sum.positive += rest_of_series(last_quarter.positive, decay);
    sum.negative += rest_of_series(last_quarter.negative, decay);
    return sum;
}

}  // namespace halflsb
