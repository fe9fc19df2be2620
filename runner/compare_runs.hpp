// Two runs, of two builds of a firmware: where their responses differ, and which change of the board makes them differ.
#pragma once

#include <functional>
#include <string>

#include "runner/explain_run.hpp"
#include "runner/open_run.hpp"
#include "runner/world/comparison.hpp"

namespace halflsb {

/// Cases of the same name are compared where both were sent the same samples, at the same rate, from the same start,
/// with the same settings. Costs a pass of each stimulus and of each capture, and then two searches (explain_run.hpp):
/// what the board before does, and what is otherwise since. Errors: the signals differ, no case is in both runs, files
/// that cannot be read.
Outcome<Comparison> compare_runs(const RunPart& before, const RunPart& after, const Files& files,
                                 const std::function<bool(int channel)>& go_on);

}  // namespace halflsb
