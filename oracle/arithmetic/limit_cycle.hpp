// What remains at the output when the input has ended: limit cycles and dead bands.
//
// Once no word overflows any more, what a filter returns on zeros is what its roundings add up to: the same sums as the
// bound of the largest error, without the points that round nothing when their input is silent. That is proven.
// Estimates of the handbooks are told as such and are never a limit: the searches beside them exceed some.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// Jackson 1969, effective values: the amplitude of an oscillation floor(0.5 / (1 - |a2|)), of a constant
/// floor(0.5 m / |1 + a1 + a2|) with m products rounded; first order floor(0.5 / (1 - |a1|)). For roundings to the
/// nearest. In steps of the state words.
struct DeadBandEstimate {
    std::string name;  ///< "stage 1, section 2"
    double step = 1.0;
    std::int64_t oscillation = 0, constant = 0;
};

/// Of a filter whose every cycle was tried.
struct SearchedSilence {
    std::int64_t lowest = 0, highest = 0;  ///< output codes on the cycle that swings furthest, 0 for the mid-code
    std::int64_t period_samples = 1;
};

struct SilenceBound {
    double step = 1.0;                               ///< an output LSB as a value
    double lower = 0.0, upper = 0.0;                 ///< proven, as values; may be infinite
    std::int64_t lowest_code = 0, highest_code = 0;  ///< the codes within, as far as 62 bits go
    std::optional<SearchedSilence> searched;         ///< exact, where the states within the bound could all be tried
    std::vector<DeadBandEstimate> estimates;

    bool is_silent() const { return lowest_code == 0 && highest_code == 0; }
};

/// `most_states`: of the exhaustive search, 0 for none. A search is made of chains of one section, one-pole or comb of
/// whole numbers, when the states that the bound leaves are no more than that.
SilenceBound silence_bound(const DescribedChain& chain, std::int64_t most_states = 1 << 18);

}  // namespace halflsb
