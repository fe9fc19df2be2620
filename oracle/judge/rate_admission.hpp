// What a case must keep to where its filter changes the rate, for refusals() of admission.hpp.
#pragma once

#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"

namespace halflsb {

/// A case begins where every decimator stands as after a reset, so do its references: what is sent, and what a running
/// case discards, are whole rate cycles; all channels change the rate alike.
void check_rate(const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals);

}  // namespace halflsb
