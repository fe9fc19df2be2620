// The captures of a run, channel by channel, put to the search for what explains them.
#pragma once

#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "oracle/explain/capture_fit.hpp"
#include "runner/judge_run.hpp"
#include "runner/world/explanation.hpp"

namespace halflsb {

/// How much of a run is looked at: of each case, from its first sample on, and of a channel in all.
struct ExplainedLength {
    std::int64_t case_samples = 65'536, channel_samples = 1 << 21;
};

/// A run whose captures are looked at, all of its parts checked.
struct RunPart {
    const RecordedRun& record;
    const Plan& plan;
    const Judgement& judgement;
};

/// For each channel the board that the search begins with in place of the declared one; none: it is not looked at.
using StartBoards = std::vector<std::optional<BoardDescription>>;

/// By filter and signal of the first part; the others were made on the same board, with the same filter. `go_on` is
/// asked often, for the channel that is looked at; false ends the search with the best so far. Errors are those of
/// files that cannot be read, and a plan whose filter is unknown.
Outcome<Explanation> explain_runs(const std::vector<RunPart>& parts, const Files& files,
                                  const std::function<bool(int channel)>& go_on, const ExplainedLength& length = {},
                                  const StartBoards* begin_with = nullptr);

/// What a channel (from 1) got and returned in a run.
Outcome<std::vector<ChannelCapture>> channel_captures(const RunPart& part, const Files& files, int channel);

}  // namespace halflsb
