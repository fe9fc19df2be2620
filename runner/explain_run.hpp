// The captures of a run, channel by channel, put to the search for what explains them.
#pragma once

#include <functional>
#include <string>

#include "runner/judge_run.hpp"
#include "runner/world/explanation.hpp"

namespace halflsb {

/// How much of a run is looked at: of each case, from its first sample on, and of a channel in all.
struct ExplainedLength {
    std::int64_t case_samples = 65'536, channel_samples = 1 << 21;
};

/// `go_on` is asked often, for the channel that is looked at; false ends the search with the best so far. Errors are
/// those of files that cannot be read, and a plan whose filter is unknown.
Outcome<Explanation> explain_run(const RecordedRun& record, const Plan& plan, const Judgement& judgement,
                                 const Files& files, const std::function<bool(int channel)>& go_on,
                                 const ExplainedLength& length = {});

/// Of a run that was just recorded, by the plan in its folder.
Outcome<Explanation> explain_recorded(const std::string& folder, const Files& files,
                                      const std::function<bool(int channel)>& go_on);

}  // namespace halflsb
