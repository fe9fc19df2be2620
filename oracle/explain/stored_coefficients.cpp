#include "oracle/explain/stored_coefficients.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {
namespace {

/// Of all that are stored.
double largest_size(const FilterDesign& design) {
    double largest = 0.0;
    const auto look = [&](const std::vector<double>& list) {
        for (const double c : list) largest = std::max(largest, std::fabs(c));
    };
    if (const auto* fir = std::get_if<Fir>(&design)) look(fir->taps);
    if (const auto* fewer = std::get_if<FirDecimator>(&design)) look(fewer->taps);
    if (const auto* more = std::get_if<FirInterpolator>(&design)) look(more->taps);
    if (const auto* comb = std::get_if<Comb>(&design)) look({comb->direct, comb->forward, comb->feedback});
    if (const auto* recursion = std::get_if<Recursion>(&design)) {
        look(recursion->b);
        look(recursion->a);
    }
    if (const auto* cascade = std::get_if<BiquadCascade>(&design))
        for (const BiquadSection& s : cascade->sections) look({s.b0, s.b1, s.b2, s.a1, s.a2});
    return largest;
}

}  // namespace

std::vector<StoredCoefficients> ways_to_store(const FilterDesign& design) {
    const double largest = largest_size(design);
    const int whole = largest < 1.0 ? 0 : static_cast<int>(std::floor(std::log2(largest))) + 1;
    std::vector<StoredCoefficients> ways;
    for (int bits = 4; bits <= 32; ++bits) {
        const bool fills_word = bits + whole == 15 || bits + whole == 31;
        const bool is_usual = bits == 14 || bits == 15 || bits == 30 || bits == 31;
        ways.push_back({bits, fills_word ? 1.0 : is_usual ? 1.5 : 4.0});
    }
    return ways;
}

}  // namespace halflsb
