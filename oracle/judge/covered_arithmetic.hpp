// Limits that a rule wants derived from the arithmetic, and why there are none.
#pragma once

#include <optional>

#include "oracle/arithmetic/described.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"

namespace halflsb {

/// No bound covers this arithmetic.
std::optional<Refusal> not_covered(const Rule& asked, const Signal& signal, const Case& the_case,
                                   const DescribedChain& chain);
/// `wanted` is wider than full scale, or infinite: a value of the output.
Refusal too_wide(const Rule& asked, const Signal& signal, const Case& the_case, double wanted);

}  // namespace halflsb
