// A run's folder opened with the plan it was made with, everything checked: where judge, explain and accept begin.
#pragma once

#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/record/recorded_run.hpp"
#include "runner/world/files.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// The plan that lies in the folder, read under the root that lies there, under the name it had. `problems` receives
/// what is wrong with it. It must read exactly the files that the run read.
Outcome<Plan> read_recorded_plan(const RecordedRun& record, const Files& files, std::vector<std::string>& problems);

struct OwnRun {
    RecordedRun record;
    Plan plan;
};
/// The record, every file of it against its hash, and the plan it was made with. Where `problems` has something the
/// plan is none.
Outcome<OwnRun> read_own_run(const std::string& folder, const Files& files, std::vector<std::string>& problems);

}  // namespace halflsb
