#include "oracle/filters/coefficients.hpp"

#include <cmath>

namespace halflsb {

namespace {

std::vector<double>* taps_of(FilterDesign& design) {
    if (auto* fir = std::get_if<Fir>(&design)) return &fir->taps;
    if (auto* decimator = std::get_if<FirDecimator>(&design)) return &decimator->taps;
    if (auto* interpolator = std::get_if<FirInterpolator>(&design)) return &interpolator->taps;
    return nullptr;
}

}  // namespace

double rounded_coefficient(double coefficient, int fraction_bits) {
    const double scaled = std::ldexp(coefficient, fraction_bits);
    // From 2^52 on every double is whole: nothing to round, and nothing to lose by overflow.
    if (!(std::fabs(scaled) < 0x1p52)) return coefficient;
    return std::ldexp(std::round(scaled), -fraction_bits);
}

FilterStage with_rounded_coefficients(const FilterStage& stage) {
    FilterStage rounded = stage;
    if (!stage.coefficient_fraction_bits) return rounded;
    const int bits = *stage.coefficient_fraction_bits;
    if (std::vector<double>* taps = taps_of(rounded.design)) {
        for (double& tap : *taps) tap = rounded_coefficient(tap, bits);
    } else if (auto* recursion = std::get_if<Recursion>(&rounded.design)) {
        for (double& b : recursion->b) b = rounded_coefficient(b, bits);
        for (std::size_t k = 1; k < recursion->a.size(); ++k)
            recursion->a[k] = rounded_coefficient(recursion->a[k], bits);
    } else if (auto* comb = std::get_if<Comb>(&rounded.design)) {
        for (double* c : {&comb->direct, &comb->forward, &comb->feedback}) *c = rounded_coefficient(*c, bits);
    } else if (auto* cascade = std::get_if<BiquadCascade>(&rounded.design); cascade && stage.kind == "one-pole") {
        // The firmware stores k alone; the pole 1 - k follows from it, and the gain at zero frequency stays 1.
        BiquadSection& s = cascade->sections.front();
        s.b0 = rounded_coefficient(s.b0, bits);
        s.a1 = s.b0 - 1.0;
    } else if (cascade) {
        for (BiquadSection& s : cascade->sections) {
            for (double* c : {&s.b0, &s.b1, &s.b2, &s.a1, &s.a2}) *c = rounded_coefficient(*c, bits);
        }
    }
    return rounded;
}

}  // namespace halflsb
