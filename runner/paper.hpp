// What a plan and a rig say on paper, without a board: the cases that would run, and what the filter does.
#pragma once

#include <cstddef>
#include <functional>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/config/rig.hpp"
#include "runner/record/json_answer.hpp"
#include "runner/world/prediction.hpp"

namespace halflsb {

/// Seconds that the case takes on the wire without resends, zeros that are sent before it included.
double wire_seconds_of(const Plan& plan, const Case& the_case, const Rig& rig);

/// `selected` are indices of the plan's cases; without a rig no time on the wire is told.
CaseList list_cases(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig);

/// The filter of each channel (one entry where all have the same), its arithmetic, what the rules would see, and which
/// cases tell their latency. Costs a pass of the reference for each case, and for what the rules would see up to a twin
/// and a judge for each change of arithmetic and case. `go_on` is asked between its parts; when it says no, what is
/// there so far is returned.
Prediction predict(const Plan& plan, const std::vector<std::size_t>& selected, const Rig* rig,
                   const std::function<bool()>& go_on);

}  // namespace halflsb
