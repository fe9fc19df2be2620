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
    bool is_since_a_run = false;       ///< the search began with the board of another run, not with the declared one
    double peak_ratio = 0.0;           ///< the level furthest from zero that was sent, of full scale
};

/// What a board was asked beyond its run, and what its answer ruled out.
struct AskedQuestion {
    struct RuledOut {
        std::vector<int> channels;
        std::string what;  ///< the cause
    };
    std::string case_name;  ///< of the run that asked it
    std::string what;       ///< the stimulus
    std::vector<RuledOut> ruled_out;
    std::size_t left = 0;  ///< causes, of all channels that were in doubt
};

/// One run of questions; its folder holds plan and captures as any run's does.
struct AskedRun {
    std::string folder;
    std::vector<AskedQuestion> questions;
};

struct Explanation {
    std::string folder, plan_file, title;
    std::vector<ExplainedChannels> channels;
    std::vector<std::string> left_out;  ///< captures that were not looked at, and why
    std::vector<AskedRun> asked;        ///< in their order
    std::string not_asked;              ///< why the board was not asked about what is left; "" where nothing is
};

}  // namespace halflsb
