// How far a case drives the nodes of the filter: of the worst that any input can do.
#pragma once

#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// A node counts as driven from here on: a pattern of signs that is cut, or 0.9 of full scale, still does.
inline constexpr double driven_least_ratio = 0.9;

/// How far into a case a node's worst is looked for: four times the longest pattern of the standard set, and short
/// enough that a plan of many cases is read at once.
inline constexpr std::int64_t reach_samples = 16384;

struct DrivenNode {
    std::string node;    ///< as RailWatch names it
    double ratio = 0.0;  ///< the largest |value| of it in the case, over the worst case
};

/// Of the nodes of a channel (counted from 1) whose impulse response is known, the output last. Looks at 4096 samples
/// of each impulse response and at the first reach_samples of the stimulus. Empty where the arithmetic cannot be
/// described.
std::vector<DrivenNode> driven_nodes(const Plan& plan, const Case& the_case, int channel);

}  // namespace halflsb
