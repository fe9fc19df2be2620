// One case: stream its stimulus, record what comes, judge it. The loop of the program.
#pragma once

#include <string>

#include "oracle/judge/plan.hpp"
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
    Recorder& recorder;
    const Clock& clock;
    RunObserver& observer;
};

/// Fills everything but names of files and hashes. A bench error makes the case invalid, with the
/// reason, and is no Error here. Errors: interrupted (nothing is recorded), output (disk full).
Outcome<CaseResult> run_case(const CaseStage& stage);

}  // namespace halflsb
