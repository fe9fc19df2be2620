// The captures of a run beside the cases of the plan it was made with: where explain and compare begin.
#pragma once

#include <string>
#include <vector>

#include "runner/cli/options.hpp"
#include "runner/explain_run.hpp"
#include "runner/judge_run.hpp"
#include "runner/open_run.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// `judgement` points into `own`.
struct OpenedCaptures {
    OwnRun own;
    Judgement judgement;
    RunPart part() const { return {own.record, own.plan, judgement}; }
};

/// Of the cases that --case and --label choose, otherwise of all that the run meant to capture. `problems` receives what
/// is wrong with the plan in the folder; then there is nothing else.
Outcome<OpenedCaptures> open_captures(const std::string& folder, const Options& options, const Files& files,
                                      std::vector<std::string>& problems);
/// The same of a run that halflsb has just made: a plan that cannot be read is a defect.
Outcome<OpenedCaptures> open_fresh_captures(const std::string& folder, const Files& files);

}  // namespace halflsb
