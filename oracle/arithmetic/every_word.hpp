// A chain in which every node has a word, so that RailWatch tells of all of them, also of those that nobody limited.
#pragma once

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// Of a node that nobody limited: wider than any comes to, and a word all the same.
inline constexpr int any_bits = wide_bits - 1;

/// Registers of a CIC that wrap are left as they are: they are told for themselves (cic_registers.hpp).
DescribedChain with_every_word(DescribedChain chain);

}  // namespace halflsb
