// One case with its attempts, and its files: the capture, and the stimulus where it is explicit.
#pragma once

#include <optional>

#include "oracle/judge/plots.hpp"
#include "runner/board.hpp"
#include "runner/board_settings.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/run_observer.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/files.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

/// What all cases of a run share.
struct RunDesk {
    const Plan& plan;
    const Rig& rig;
    const RunResult& run;  ///< so far
    const RunFolder& folder;
    Board& board;
    BoardSettings& settings;
    Files& files;
    const Clock& clock;
    RunObserver& observer;
};

struct RecordedCase {
    CaseResult result;
    /// The board did not answer any more when the case was to run again; then `result` is the attempt before.
    std::optional<Error> board_gone;
    CasePlots plots = {};  ///< of what was judged
};

/// Streams, records and judges the plan's case `index` (from 0), `place` among the selected ones (from 1). A case
/// whose capture is not whole runs again as often as the rig allows, each time on a board that was greeted anew; one
/// that failed or is undecided never. All files are on the disk when this returns; everything of the result but the
/// rerun command is filled in. Errors: interrupted, output, defect.
Outcome<RecordedCase> run_and_record(const RunDesk& desk, std::size_t index, std::size_t place);

}  // namespace halflsb
