// Norms and flush_samples (filter.hpp) of linear chains that change the rate. Private to oracle.
//
// Such a chain treats the inputs of its rate cycle (rates.hpp) unlike: each has an impulse response of its own, and an
// output's weights are those of every response at the outputs of its phase. So each input of the cycle is run.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// Sums over an output's weights, each of the output phase where it is the largest (or the lowest).
struct PhaseSums {
    double sizes = 0.0;                     ///< of |h|
    double positive = 0.0, negative = 0.0;  ///< of those above 0, and below it
};
/// Until what is left of each response is below `tail` of its size; the rest counts as either sign. nullopt where the
/// rate cycle is longer than 4096 samples, a response than 2^20, all of them together than 2^29 samples of the fastest
/// stage (seconds), or where the rate rises by more than 2^14.
std::optional<PhaseSums> sums_of_changing_rate(const FilterChain& chain, double tail);

/// Of the output phase whose weights have the largest sum; the product of the stages' where those sums are not known.
double l1_of_changing_rate(const FilterChain& chain, double tail);

/// The smallest multiple of the cycle's inputs that leaves less than `limit` of an input of 1 on every output phase;
/// the largest weight of any phase stands for all of them.
std::optional<std::int64_t> flush_of_changing_rate(const FilterChain& chain, double limit);

}  // namespace halflsb
