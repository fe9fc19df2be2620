// What a filter in stated arithmetic can go on returning when its input is silent: every cycle that is reached from
// a box of states, found by trying them all.
//
// A search proves something about the filter only where the box holds every state that it can have when the input
// ends; the caller knows that (a bound of what roundings add up to), the search does not.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

struct ZeroInputCycle {
    std::int64_t lowest = 0,
                 highest = 0;         ///< of what is returned on it, in output codes, 0 for the mid-code of u formats
    std::int64_t period_samples = 1;  ///< of the states, in samples of the input
    std::int64_t largest() const { return highest > -lowest ? highest : -lowest; }
};

inline constexpr std::int64_t most_searched_states = std::int64_t{1} << 22;

/// The cycles, those that swing the furthest first, of equal ones the shortest. `limits` are for each word of
/// Twin::state(), in its order: from every state with |word| <= limit, as far as the words can hold it, the twin runs
/// on zeros until it is on a cycle, be it outside the box. The state that stays 0 is one of them, of period 1.
///
/// nullopt where the box has more than most_searched_states, where a float32 keeps a state (its words are bits of
/// floats), where no twin can be made of the chain, or where walks outside the box take more than 16 times
/// most_searched_states steps. Time: some 1 us a state. Memory: 4 bytes a state.
std::optional<std::vector<ZeroInputCycle>> zero_input_cycles(const DescribedChain& chain,
                                                             std::span<const std::int64_t> limits);

}  // namespace halflsb
