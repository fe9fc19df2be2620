// Which cases of a plan the command line asks for, and which are left out.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/cli/options.hpp"
#include "runner/config/rig.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// Indices of the plan's cases, ascending.
struct CaseChoice {
    std::vector<std::size_t> selected;
    /// Cases that the user did not take out by name or label: long ones of the standard set without --all, and what
    /// --for has no time for.
    std::vector<std::size_t> left_out;
    std::string why_left_out;  ///< "--all runs it too", "no time within --for 60s"; "" when none is
};

/// By --case, --label, --all and --for. A companion brings its base, a base its companions. --for keeps the longest row
/// of cases, from the first on, whose time on the wire fits, on the slowest of the rigs; an error of kind usage when
/// not even the first one does, and without a rig.
Outcome<CaseChoice> choose_cases(const Plan& plan, const Options& options, const std::vector<Rig>& rigs);

}  // namespace halflsb
