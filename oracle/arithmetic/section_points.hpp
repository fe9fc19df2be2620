// The rounding points of a section, or of a recursion of any order, in each structure. Private to this room.
#pragma once

#include "oracle/arithmetic/stage_sums.hpp"

namespace halflsb {

struct SectionCoefficients {
    std::vector<double> forward, feedback;  ///< b0 b1 ..., a1 a2 ...
};

/// Adds those of the section-th of the stage, the last of it if `is_last`; what it returns is then the input at hand.
void add_section(StageSums& stage_sums, const SectionCoefficients& section, std::size_t section_index, bool is_last);

}  // namespace halflsb
