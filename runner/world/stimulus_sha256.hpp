// What was sent, as a record and a baseline keep it.
#pragma once

#include <cstdint>
#include <string>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Of the codes that a case sends in its first `samples` instants, all channels. Costs a pass of them.
std::string stimulus_sha256(const Plan& plan, const Case& the_case, std::int64_t samples);

}  // namespace halflsb
