// What `halflsb compare` tells of two runs, as record and report see it.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "runner/world/explanation.hpp"

namespace halflsb {

/// Of one channel of a case: the response of the run after less that of the run before.
struct ComparedChannel {
    int channel = 1;  ///< from 1
    std::int64_t different = 0;
    std::int64_t first_index = -1;     ///< of the first sample that differs; -1: none does
    double before = 0.0, after = 0.0;  ///< there; in LSB, of f32 the values
    double mean = 0.0, rms = 0.0;      ///< over all samples, likewise
    double largest = 0.0;              ///< with its sign
    std::int64_t largest_index = -1;
};

struct ComparedCase {
    std::string name;
    std::int64_t samples = 0;  ///< compared; the shorter one's
    std::int64_t samples_before = 0, samples_after = 0;
    std::vector<ComparedChannel> channels;
    bool differs() const;
};

struct ComparedRun {
    std::string folder, plan_file, started_utc, build_id;
};

struct Comparison {
    ComparedRun before, after;
    bool has_lsb = true;  ///< differences are in LSB of the output, else values
    std::vector<ComparedCase> cases;
    std::vector<std::string> left_out;  ///< cases of either run, and why they are not compared
    /// What the board of the run before does, by its plan, and what that of the run after does otherwise; none where
    /// nothing differs.
    std::optional<Explanation> board_before, change;
    std::vector<std::string> not_explained;  ///< why there is no change of some channel
    bool differs() const;
};

}  // namespace halflsb
