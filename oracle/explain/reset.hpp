// What a reset leaves of a filter's state: one of the slots of a hypothesis.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// What a reset does before a case that begins with one. Of a state in the order in which a twin tells it: past inputs
/// newest first, then past results or a running sum; of a cascade section by section.
enum class ResetKind {
    whole,
    none,             ///< nothing: the state of the case before stays
    first_half,       ///< only the first half of the words of the state is cleared
    second_half,      ///< only the second half
    all_but_sum,      ///< all but the last word: a running sum, a remainder
    newer_half,       ///< of the past inputs the newer half, and what stands behind them not
    older_half,       ///< of the past inputs the older half, and what stands behind them not
    section_inputs,   ///< of each section the inputs, its results stay
    section_results,  ///< of each section the results, its inputs stay
    /// Past inputs lie in a ring: the first half of it is cleared and begun anew, with a sum of 0 where there is one.
    ring_begun_anew,
    /// The same half, and the place in the ring stays, and the sum.
    ring_start,
};

struct NamedReset {
    ResetKind kind = ResetKind::whole;
    std::string what;
    double price_bits = 0.0;
};
/// All but `whole` that the last stage of the chain can have.
std::vector<NamedReset> resets_of(const FilterChain& chain);

/// The words that such a reset leaves of `words`, `samples` after the reset before.
std::vector<std::int64_t> left_by(ResetKind kind, const FilterChain& chain, std::vector<std::int64_t> words,
                                  std::int64_t samples);

}  // namespace halflsb
