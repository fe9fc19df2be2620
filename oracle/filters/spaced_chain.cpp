#include "oracle/filters/spaced_chain.hpp"

#include <numeric>

namespace halflsb {

SpacedChain without_spacing(const FilterChain& chain) {
    int spacing = 0;
    for (const FilterStage& stage : chain) {
        if (const auto* comb = std::get_if<Comb>(&stage.design)) {
            spacing = std::gcd(spacing, comb->delay_samples);
        } else if (const auto* fir = std::get_if<Fir>(&stage.design); fir == nullptr || fir->taps.size() != 1) {
            return {chain, 1};
        }
    }
    if (spacing <= 1) return {chain, 1};
    SpacedChain spaced{chain, spacing};
    for (FilterStage& stage : spaced.chain) {
        if (auto* comb = std::get_if<Comb>(&stage.design)) comb->delay_samples /= spacing;
    }
    return spaced;
}

}  // namespace halflsb
