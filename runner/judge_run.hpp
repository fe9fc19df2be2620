// The captures of a recorded run against a plan: the one it was made with, or another. No board, nothing written.
#pragma once

#include <cstddef>
#include <string>
#include <utility>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/plots.hpp"
#include "runner/record/recorded_run.hpp"
#include "runner/world/files.hpp"
#include "runner/world/result.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// Which capture answers which case.
struct Judgement {
    /// Facts of the run and what was selected of the plan, no case judged yet. Cases without a capture are counted as
    /// not run, with an ended_by that names them; captures that no case of the plan asks for stand in warnings.
    RunResult run;
    struct Match {
        std::size_t case_index;      ///< in the plan
        const CaseResult* recorded;  ///< in the record
    };
    std::vector<Match> matches;  ///< in the plan's order
    bool another_plan = false;
};

/// Matches by name. `selected` are indices of the plan's cases. Refused by name, as errors of kind input: a case whose
/// stimulus is not what was sent (its capture answers another question), whose rate, start state or settings differ,
/// a plan of another filter, another format or number of channels. Costs a pass of each stimulus.
Outcome<Judgement> match_captures(const RecordedRun& record, const Plan& plan, bool another_plan,
                                  const std::vector<std::size_t>& selected);

/// One case, from its capture in blocks. An invalid one stays invalid with its reason. An interruption is an error.
/// `plots` receives what a person wants to see of it.
Outcome<CaseResult> judge_capture(const RecordedRun& record, const Plan& plan, const Judgement::Match& match,
                                  const Files& files, CasePlots* plots = nullptr);

/// Cases that the recorded run meant to capture; an error when the plan does not have one of them.
Outcome<std::vector<std::size_t>> recorded_cases(const RecordedRun& record, const Plan& plan);

}  // namespace halflsb
