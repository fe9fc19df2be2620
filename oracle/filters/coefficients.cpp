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

double rounded_coefficient(double coefficient, int fraction_bits, Rounding rounding) {
    const double scaled = std::ldexp(coefficient, fraction_bits);
    // From 2^52 on every double is whole: nothing to round, and nothing to lose by overflow.
    if (!(std::fabs(scaled) < 0x1p52)) return coefficient;
    return std::ldexp(round_to_whole(scaled, rounding), -fraction_bits);
}

FilterStage with_rounded_coefficients(const FilterStage& stage) {
    FilterStage rounded = stage;
    if (!stage.coefficient_fraction_bits) return rounded;
    const int bits = *stage.coefficient_fraction_bits;
    const Rounding rounding = stage.arithmetic.coefficient_rounding;
    const bool added =
        stage.arithmetic.feedback_coefficients.value_or(FeedbackCoefficients::added) == FeedbackCoefficients::added;
    const auto forward = [&](double& c) { c = rounded_coefficient(c, bits, rounding); };
    // What is stored is -a where products are added; only floor and half-up tell the difference.
    const auto feedback = [&](double& a) {
        a = added ? 0.0 - rounded_coefficient(-a, bits, rounding) : rounded_coefficient(a, bits, rounding);
    };
    if (std::vector<double>* taps = taps_of(rounded.design)) {
        for (double& tap : *taps) forward(tap);
    } else if (auto* recursion = std::get_if<Recursion>(&rounded.design)) {
        for (double& b : recursion->b) forward(b);
        for (std::size_t k = 1; k < recursion->a.size(); ++k) feedback(recursion->a[k]);
    } else if (auto* comb = std::get_if<Comb>(&rounded.design)) {
        forward(comb->direct);
        forward(comb->forward);
        feedback(comb->feedback);
    } else if (auto* cascade = std::get_if<BiquadCascade>(&rounded.design); cascade && stage.kind == "one-pole") {
        // The firmware stores k alone; the pole 1 - k follows from it, and the gain at zero frequency stays 1.
        BiquadSection& s = cascade->sections.front();
        forward(s.b0);
        s.a1 = s.b0 - 1.0;
    } else if (cascade) {
        for (BiquadSection& s : cascade->sections) {
            for (double* c : {&s.b0, &s.b1, &s.b2}) forward(*c);
            for (double* a : {&s.a1, &s.a2}) feedback(*a);
        }
    }
    return rounded;
}

}  // namespace halflsb
