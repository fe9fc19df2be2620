// What a plan and a rig say on paper, without a board: the cases that would run, and what the filter does.
#pragma once

#include <cstddef>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/rig.hpp"
#include "runner/record/json_answer.hpp"

namespace halflsb {

/// Seconds that the case takes on the wire without resends, zeros that are sent before it included.
double wire_seconds_of(const Plan& plan, const Case& the_case, const Rig& rig);

/// `selected` are indices of the plan's cases; without a rig no time on the wire is told.
CaseList list_cases(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig);

/// The filter of each channel (one entry where all have the same), and which cases tell their latency. Costs a pass of
/// the reference for each case.
Prediction predict(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig);

}  // namespace halflsb
