// l1_norm and flush_samples (filter.hpp) of linear chains that change the rate. Private to this room.
//
// Such a chain treats the inputs of its rate cycle (rates.hpp) unlike: each has an impulse response of its own, and an
// output's weights are those of every response at the outputs of its phase. So each input of the cycle is run.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// Of the output phase whose weights have the largest sum.
double l1_of_changing_rate(const FilterChain& chain, double tail);

/// The smallest multiple of the cycle's inputs that leaves less than `limit` of an input of 1 on every output phase;
/// the largest weight of any phase stands for all of them.
std::optional<std::int64_t> flush_of_changing_rate(const FilterChain& chain, double limit);

}  // namespace halflsb
