// What was sent, as a record and a baseline keep it.
#pragma once

#include <string>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Of the codes that a case sends, all channels. Costs a pass of the stimulus.
std::string stimulus_sha256(const Plan& plan, const Case& the_case);

}  // namespace halflsb
