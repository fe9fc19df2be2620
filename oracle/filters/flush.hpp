// flush_samples (filter.hpp) of filters that may forget too slowly for whoever asks, and how long that is looked into.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// nullopt: no N up to `most` could be proven to do; that costs a run over at most 2 `most` samples of a chain that
/// keeps its rate.
std::optional<std::int64_t> flush_samples_within(const FilterChain& chain, double full_scale, double half_step,
                                                 std::int64_t most);

}  // namespace halflsb
