// What a firmware's author may have got wrong about the filter itself, one thing at a time: coefficients, their order,
// the length of a window, what a reset writes. How coefficients were rounded: coefficient_changes.hpp.
#pragma once

#include <vector>

#include "oracle/explain/hypothesis.hpp"

namespace halflsb {

/// Boards one change of a filter's description away, of every stage.
std::vector<Hypothesis> filter_changes(const Hypothesis& from);

}  // namespace halflsb
