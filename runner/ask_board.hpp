// Asking a board what its captures leave open: the stimuli that tell the causes apart are streamed, recorded as a run
// of their own beside the first one, and every capture is looked at again.
#pragma once

#include <functional>
#include <string>

#include "runner/config/rig.hpp"
#include "runner/open_captures.hpp"
#include "runner/run_observer.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// Rounds of questions: an answer that fits no cause sends the search out anew.
inline constexpr int most_rounds_of_questions = 3;

struct AskRequest {
    std::string tool_version;
    const OpenedCaptures& run;
    Rig rig;
    std::string rig_text;
    std::function<bool(int channel)> go_on;  ///< of the searches
    std::function<bool()> may_ask;           ///< before each round: time is left
};

struct AskResult {
    Explanation explanation;  ///< the best so far, also when something ended the asking
    std::optional<Error> ended_by;
};

/// Nothing is asked where the captures decide. No question goes beyond the level that the run has sent, and the board
/// must run the firmware of the run where that has a build-id. The Error is one of the first search.
Outcome<AskResult> ask_board(const AskRequest& request, Files& files, const Clock& clock, RunObserver& observer);

}  // namespace halflsb
