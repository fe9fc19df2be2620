// What a case takes on the wire, with the zeros of its flush and the blocks of a companion.
#pragma once

#include "oracle/judge/plan.hpp"
#include "runner/wire/wire_cost.hpp"

namespace halflsb {

/// Zeros of a flush and the stimulus: the instants that travel.
std::int64_t sent_samples(const Case& the_case);

/// Where the board takes blocks of `granted_samples`.
WireCost case_cost(const Case& the_case, std::int64_t granted_samples, const WireInstant& instant);

}  // namespace halflsb
