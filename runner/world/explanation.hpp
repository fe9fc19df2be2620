// What `halflsb explain` tells of a run, as record and report see it.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "oracle/explain/finding.hpp"

namespace halflsb {

/// Channels with the same filter that came to the same.
struct ExplainedChannels {
    std::vector<int> channels;  ///< from 1
    Finding finding;
    std::vector<std::string> cases;    ///< names of the captures, in the order in which the finding counts them
    std::int64_t samples = 0;          ///< of all of them, that a hypothesis must reproduce
    std::vector<PlanPosition> stages;  ///< where the plan says each stage of the channel's chain
};

struct Explanation {
    std::string folder, plan_file, title;
    std::vector<ExplainedChannels> channels;
    std::vector<std::string> left_out;  ///< captures that were not looked at, and why
    double seconds = 0.0;
};

}  // namespace halflsb
