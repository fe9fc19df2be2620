// Sums over an impulse response: of its squares, and of its two signs.
#include <array>
#include <cmath>
#include <optional>

#include "oracle/filters/exact_sums.hpp"
#include "oracle/filters/impulse_sums.hpp"
#include "oracle/filters/memory.hpp"
#include "oracle/filters/node_path.hpp"

namespace halflsb {

namespace {

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

std::array<double, 1> sum_of_squares(std::span<const double> piece) {
    double sum = 0.0;
    for (const double h : piece) sum += h * h;
    return {sum};
}

/// Of what is above 0, and of what is below.
std::array<double, 2> sums_of_signs(std::span<const double> piece) {
    double positive = 0.0, negative = 0.0;
    for (const double h : piece) (h > 0.0 ? positive : negative) += h;
    return {positive, negative};
}

}  // namespace

double dc_gain(const FilterChain& chain) { return response_at(chain, 0.0).real(); }

double noise_power_gain(const FilterChain& chain) {
    if (const auto closed = closed_noise(chain)) return *closed;
    const auto is_done = [](const std::array<double, 1>& sum, double rest) {
        return rest * rest <= unit_share * sum[0];  // rest is of sum |h|, whose square is the more
    };
    return sums_over_impulse<1>(chain, 2.0, sum_of_squares, is_done)[0];
}

double l2_norm(const FilterChain& chain) { return std::sqrt(noise_power_gain(chain)); }

SignedSums signed_sums(const FilterChain& chain, double tail) {
    const auto is_done = [tail](const std::array<double, 2>& sums, double rest) {
        return rest <= tail * (sums[0] - sums[1]);
    };
    const auto sums = sums_over_impulse<2>(chain, 1.0, sums_of_signs, is_done);
    return {sums[0], sums[1]};
}

}  // namespace halflsb
