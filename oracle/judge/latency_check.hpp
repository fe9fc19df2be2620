// What a case must be to tell its latency, where a plan asks for it in writing.
#pragma once

#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"

namespace halflsb {

void check(const LatencyRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
