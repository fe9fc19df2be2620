// What a case must be to tell its latency, where a plan asks for it in writing.
#pragma once

#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"

namespace halflsb {

/// Whether a stimulus has the frequencies, and comes often enough at each, to tell a fraction of a sample.
bool tells_fraction(const Plan& plan, const Case& the_case);

void check(const LatencyRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
