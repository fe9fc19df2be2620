#include "oracle/filters/stability.hpp"

#include <algorithm>
#include <cmath>

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

double largest_pole_radius(const FilterChain& chain) {
    double largest = 0.0;
    for (const FilterStage& stage : chain) {
        if (const auto* cascade = std::get_if<BiquadCascade>(&stage.design)) {
            for (const BiquadSection& section : cascade->sections) largest = std::max(largest, pole_radius(section));
        }
        if (const auto* comb = std::get_if<Comb>(&stage.design)) largest = std::max(largest, pole_radius(*comb));
    }
    return largest;
}

}  // namespace halflsb
