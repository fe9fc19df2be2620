// Whether two chains are the same filter in the same arithmetic: every word of every stage is equal.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// Numbers are compared as they are, so a chain that holds a NaN is not even the same as itself.
bool same_chain(const FilterChain& a, const FilterChain& b);

}  // namespace halflsb
