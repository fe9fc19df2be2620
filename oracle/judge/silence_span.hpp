// Where the response is to be silent: behind the end of the stimulus and the design's tail.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/judge/plan.hpp"

namespace halflsb {

struct SilenceSpan {
    std::int64_t silent_sent = 0;     ///< zeros (mid-codes) at the end of the stimulus
    std::int64_t tail_sent = 0;       ///< of them those that the tail takes
    std::int64_t first_index = 0;     ///< of the response at a lag of 0, from which on it is judged
    std::int64_t judged_samples = 0;  ///< from there to the end, at the lag that is expected
};

/// What is sent to a driven channel decides, also for the others. Nothing need die away where nothing was sent after a
/// reset or a flush. nullopt: nobody knows how long the tail is.
std::optional<SilenceSpan> silence_span(const Plan& plan, const Case& the_case, int channel);

}  // namespace halflsb
