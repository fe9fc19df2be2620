// How a node of a described chain answers an impulse at the input: the stimulus that drives the node the hardest is
// full scale times the signs of that response, reversed in time, and what it comes to is full scale times the sum of
// |h|.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// `node` as RailWatch names it: "stage 1, section 2, state". `length` samples of the value at the node, nothing
/// rounded and nothing clipped, for 1, 0, 0 ... at the chain's input. Empty for a name that is not there, and for nodes
/// at or behind a median or a stage that changes the rate.
std::vector<double> node_impulse(const DescribedChain& chain, const std::string& node, std::size_t length);

}  // namespace halflsb
