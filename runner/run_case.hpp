// One case: stream its stimulus, record what comes, judge it. The loop of the program.
#pragma once

#include <string>

#include "oracle/judge/base_response.hpp"
#include "oracle/judge/block_ticks.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/plots.hpp"
#include "runner/board_settings.hpp"
#include "runner/capture/recorder.hpp"
#include "runner/run_observer.hpp"
#include "runner/wire/wire.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

struct CaseStage {
    const Plan& plan;
    const Case& the_case;
    std::size_t number;         ///< in the plan, from 1
    std::size_t place;          ///< among the selected ones, from 1
    std::size_t filter_number;  ///< of the board's greeting
    Wire& wire;
    long baud;  ///< 0 where it has no meaning
    BoardSettings& settings;
    Recorder& recorder;
    Recorder* sent;  ///< keeps the stimulus; nullptr where its recipe is enough
    const Clock& clock;
    RunObserver& observer;
    BaseResponse base = {};      ///< of a companion
    CasePlots* plots = nullptr;  ///< receives what a person wants to see of it; nullptr: nothing is wanted
    TickCounter tick_counter = {};
    Recorder* ticks = nullptr;  ///< keeps the board's ticks (block_ticks.hpp); nullptr where no rule asks for them
};

/// Fills everything but names of files, their hashes and earlier attempts. A bench error makes the case invalid,
/// with the reason, and is no Error here. Errors: interrupted (nothing is recorded), output (disk full).
///
/// A case that starts from reset opens a new stream. One that flushes or goes on running stays in the stream that is
/// open, if there is one: what the case before left in the filter is what it is about.
Outcome<CaseResult> run_case(const CaseStage& stage);

}  // namespace halflsb
