#include "oracle/filters/stability.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/double_double.hpp"

namespace halflsb {

bool is_stable(const BiquadSection& section) {
    const double a1 = std::fabs(section.a1);
    if (!(std::fabs(section.a2) < 1.0)) return false;
    // Each comparison is made where its difference or sum is exact (Sterbenz 1974), or far from equal.
    return a1 >= 0.5 ? a1 - 1.0 < section.a2 : a1 < 1.0 + section.a2;
}

double pole_radius(const BiquadSection& section) {
    const double discriminant = section.a1 * section.a1 - 4.0 * section.a2;
    if (discriminant < 0.0) return std::sqrt(section.a2);
    return 0.5 * (std::fabs(section.a1) + std::sqrt(discriminant));
}

double pole_radius(const Comb& comb) { return std::pow(std::fabs(comb.feedback), 1.0 / comb.delay_samples); }

namespace {

// All roots of z^K + a[1] z^(K-1) + ... + a[K] lie inside the unit circle. Each step takes one order off; its last
// coefficient is the product of the roots, which tells. NaN from an overflow is no yes.
bool all_roots_inside(std::vector<DoubleDouble> a) {
    for (std::size_t order = a.size() - 1; order > 0; --order) {
        const DoubleDouble k = a[order];
        const DoubleDouble rest = (DoubleDouble(1.0) - k) * (DoubleDouble(1.0) + k);
        if (!(std::fabs(k.high) <= 1.0 && rest.high > 0.0)) return false;
        const std::vector<DoubleDouble> before = a;
        for (std::size_t i = 1; i < order; ++i) a[i] = (before[i] - k * before[order - i]) / rest;
        a.resize(order);
    }
    return true;
}

// With the roots divided by `radius`.
std::vector<DoubleDouble> scaled(const std::vector<double>& a, double radius) {
    std::vector<DoubleDouble> result;
    DoubleDouble power(1.0);
    for (const double coefficient : a) {
        result.push_back(DoubleDouble(coefficient) / power);
        power = power * DoubleDouble(radius);
    }
    return result;
}

}  // namespace

bool is_stable(const Recursion& recursion) { return all_roots_inside(scaled(recursion.a, 1.0)); }

double pole_radius(const Recursion& recursion) {
    std::vector<double> a = recursion.a;
    while (a.size() > 1 && a.back() == 0.0) a.pop_back();
    // No root is larger than twice the largest |a[k]|^(1/k) (Fujiwara 1916).
    double high = 0.0;
    for (std::size_t k = 1; k < a.size(); ++k)
        high = std::max(high, 2.0 * std::pow(std::fabs(a[k]), 1.0 / static_cast<double>(k)));
    double low = 0.0;
    for (int halving = 0; halving < 50; ++halving) {
        const double middle = 0.5 * (low + high);
        (all_roots_inside(scaled(a, middle)) ? high : low) = middle;
    }
    return high;
}

double largest_pole_radius(const FilterChain& chain) {
    double largest = 0.0;
    for (const FilterStage& stage : chain) {
        if (const auto* cascade = std::get_if<BiquadCascade>(&stage.design)) {
            for (const BiquadSection& section : cascade->sections) largest = std::max(largest, pole_radius(section));
        }
        if (const auto* recursion = std::get_if<Recursion>(&stage.design))
            largest = std::max(largest, pole_radius(*recursion));
        if (const auto* comb = std::get_if<Comb>(&stage.design)) largest = std::max(largest, pole_radius(*comb));
    }
    return largest;
}

}  // namespace halflsb
