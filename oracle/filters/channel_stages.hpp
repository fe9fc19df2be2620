// Which stages of a plan's chain a channel passes; channels count from 1. filter.hpp has the chain of them.
#pragma once

#include <cstddef>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

bool passes(const FilterStage& stage, int channel);
/// Their places in the chain, in order.
std::vector<std::size_t> stages_of_channel(const FilterChain& chain, int channel);
/// Some stage is one of certain channels alone.
bool channels_differ(const FilterChain& chain);

}  // namespace halflsb
