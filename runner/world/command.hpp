// Runs one command of the lab's rig file: an argument list, no shell, a time limit. Only a rig may name
// commands; a plan, which comes with a pull request, never does.
#pragma once

#include <string>
#include <vector>

#include "runner/world/clock.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// Starts arguments[0] in `folder` with no standard input, and waits until it ends. Its output goes to
/// the diagnostics line by line. Errors, place = the command: bench when it cannot be started, ends with
/// a status other than 0, dies of a signal, or runs longer than `limit` (it and its children are then
/// stopped); the last lines of its output stand in the problem. Interrupted when the user asks to stop.
Outcome<void> run_command(const std::vector<std::string>& arguments, const std::string& folder, Duration limit,
                          const Clock& clock);

}  // namespace halflsb
