#include "oracle/arithmetic/same_chain.hpp"

#include <algorithm>
#include <tuple>
#include <type_traits>

namespace halflsb {
namespace {

// Structured bindings name every member: who adds one is told by the compiler.

auto members(const MovingAverage& x) {
    const auto& [points] = x;
    return std::tie(points);
}

auto members(const Fir& x) {
    const auto& [taps] = x;
    return std::tie(taps);
}

auto members(const BiquadSection& x) {
    const auto& [b0, b1, b2, a1, a2] = x;
    return std::tie(b0, b1, b2, a1, a2);
}

auto members(const Comb& x) {
    const auto& [delay, direct, forward, feedback] = x;
    return std::tie(delay, direct, forward, feedback);
}

auto members(const Recursion& x) {
    const auto& [b, a] = x;
    return std::tie(b, a);
}

auto members(const Median& x) {
    const auto& [points] = x;
    return std::tie(points);
}

auto members(const CicDecimator& x) {
    const auto& [order, factor, delay, shift_bits, phase] = x;
    return std::tie(order, factor, delay, shift_bits, phase);
}
auto members(const CicInterpolator& x) {
    const auto& [order, factor, delay, shift_bits] = x;
    return std::tie(order, factor, delay, shift_bits);
}
auto members(const FirDecimator& x) {
    const auto& [taps, factor, phase] = x;
    return std::tie(taps, factor, phase);
}
auto members(const FirInterpolator& x) {
    const auto& [taps, factor] = x;
    return std::tie(taps, factor);
}

auto members(const StageArithmetic& x) {
    const auto& [coefficient_fraction_bits, accumulator_bits, rounding, output_overflow, stage_format, number,
                 structure, rounding_at, output_rounding, fraction_saving, coefficient_bits, coefficient_rounding,
                 feedback_coefficients, accumulator_fraction_bits, accumulator_overflow, state_bits,
                 state_fraction_bits, state_overflow, division, fused_multiply_add, summation] = x;
    return std::tie(coefficient_fraction_bits, accumulator_bits, rounding, output_overflow, stage_format, number,
                    structure, rounding_at, output_rounding, fraction_saving, coefficient_bits, coefficient_rounding,
                    feedback_coefficients, accumulator_fraction_bits, accumulator_overflow, state_bits,
                    state_fraction_bits, state_overflow, division, fused_multiply_add, summation);
}

bool same(const BiquadCascade& a, const BiquadCascade& b) {
    return std::equal(a.sections.begin(), a.sections.end(), b.sections.begin(), b.sections.end(),
                      [](const BiquadSection& s, const BiquadSection& t) { return members(s) == members(t); });
}

template <class Kind>
bool same(const Kind& a, const Kind& b) {
    return members(a) == members(b);
}

bool same(const FilterDesign& a, const FilterDesign& b) {
    if (a.index() != b.index()) return false;
    return std::visit([&b](const auto& kind) { return same(kind, std::get<std::decay_t<decltype(kind)>>(b)); }, a);
}

bool same_stage(const FilterStage& a, const FilterStage& b) {
    const auto& [design, bits, arithmetic, kind, channels, initial] = a;
    return bits == b.coefficient_fraction_bits && kind == b.kind && channels == b.channels && initial == b.initial &&
           members(arithmetic) == members(b.arithmetic) && same(design, b.design);
}

}  // namespace

bool same_chain(const FilterChain& a, const FilterChain& b) {
    return std::equal(a.begin(), a.end(), b.begin(), b.end(), same_stage);
}

}  // namespace halflsb
