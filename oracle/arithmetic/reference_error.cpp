#include "oracle/arithmetic/reference_error.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

namespace {

/// All stages are FIR whose sums are exact: terms of so many bits, and so many of them.
bool is_exact(const DescribedChain& chain, const ExactChain& exact) {
    if (chain.stages.size() != 1 || exact.stages.size() != 1) return false;
    const DescribedStage& stage = chain.stages.front();
    const auto* fir = std::get_if<Fir>(&exact.stages.front().design);
    if (fir == nullptr || stage.in.is_float || stage.number == NumberKind::float32 || !stage.coefficients_are_said) {
        return false;
    }
    double sum = 0.0;
    for (const double tap : fir->taps) sum += std::fabs(tap);
    return std::ldexp(sum, stage.coefficient_fraction_bits + stage.in.word.bits - 1) < 0x1p53;
}

}  // namespace

double largest_value(const Port& port) { return port.is_float ? 1.0 : -lowest_value(port.word); }

double reference_error(const DescribedChain& chain, const ExactChain& exact, double largest_input) {
    if (is_exact(chain, exact)) return 0.0;
    // A pole near the circle lets the last place of the output come back 1 / (1 - radius) times.
    const double slow = 0x1p-50 / (1.0 - largest_pole_radius(exact.stages));
    return std::max(0x1p-42, slow) * l1_norm(exact.stages) * largest_input;
}

}  // namespace halflsb
