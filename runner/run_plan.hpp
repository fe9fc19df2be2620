// One plan on one rig: the main job, readable as a list of calls.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/board.hpp"
#include "runner/config/rig.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/report/html_report.hpp"
#include "runner/run_observer.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/files.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

struct RunRequest {
    std::string tool_version;
    Plan plan;
    Rig rig;
    std::string plan_text, rig_text;    ///< of both files, for the record
    std::vector<std::size_t> selected;  ///< indices of the plan's cases, ascending
    std::vector<std::size_t> left_out;  ///< cases that the user did not take out, and why they do not run
    std::string why_left_out;
    std::optional<Image> image;
    std::optional<std::string> out;     ///< folder of the run
    std::optional<std::uint64_t> seed;  ///< as given on the command line
    std::optional<std::string> root;    ///< likewise
    std::vector<std::string> warnings;
    std::string folder_note = {};  ///< part of the default folder's name, where one call makes several runs
};

/// Never throws away a finished case: each is on the disk before the next begins. What ended the run
/// early, if anything, is in ended_by; an invalid case does not end it as long as the board answers.
RunResult run_plan(const RunRequest& request, Files& files, const Clock& clock, RunObserver& observer);

/// The part of it on a board that greeted and agrees with the plan's signal: settings are checked before the first
/// sample, each case streamed, judged and recorded, and settings that cases changed put back at the end, whatever
/// ended it; what the page shows of a case is added to it. The Error is what ended it before its last case.
Outcome<void> run_cases(const RunRequest& request, Board& board, RunResult& run, RunFolder& folder, HtmlReport& page,
                        Files& files, const Clock& clock, RunObserver& observer);

}  // namespace halflsb
