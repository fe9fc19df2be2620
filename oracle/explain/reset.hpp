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
    /// The first `places` of the ring are cleared and it is begun anew, with the sum as it was.
    ring_places,
    all_but_combs,        ///< of a CIC: the integrators and the count
    all_but_integrators,  ///< of a CIC: the combs and the count
    /// All is cleared, and then the first sample stands in each place of the state, as if it had always been there.
    first_sample,
};

struct NamedReset {
    ResetKind kind = ResetKind::whole;
    int places = 0;  ///< of ring_places
    std::string what;
    double price_bits = 0.0;
};
/// All but `whole` that the last stage of the chain can have.
std::vector<NamedReset> resets_of(const FilterChain& chain);

/// What is known of a state when a reset comes.
struct StateBefore {
    std::vector<std::int64_t> words;
    std::int64_t samples = 0;  ///< since the reset before
    std::int64_t oldest = 0;   ///< in the ring, where the state does not have it because it is spent
};
/// The words that such a reset leaves; `cleared` is the state of a whole one.
std::vector<std::int64_t> left_by(ResetKind kind, int places, const FilterChain& chain, StateBefore before,
                                  const std::vector<std::int64_t>& cleared);

/// How many past samples the ring of the only stage has; 0: it has none.
std::size_t ring_length(const FilterChain& chain);

}  // namespace halflsb
