// Boards one decision about the arithmetic away.
#pragma once

#include <vector>

#include "oracle/explain/hypothesis.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// The changes that `predict` speaks of (oracle/arithmetic/plausible_changes.hpp), and those beyond them: each product
/// shortened in any way, sums of any usual width, constants added to a sum.
std::vector<Hypothesis> arithmetic_changes(const Hypothesis& from, const Signal& signal);

}  // namespace halflsb
