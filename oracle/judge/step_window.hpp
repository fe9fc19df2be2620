// Where a stimulus steps from one level to another, and which samples of the response show it.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/sample_window.hpp"
#include "oracle/measure/state_levels.hpp"

namespace halflsb {

/// The first change of what is sent: of a square its first edge.
struct LevelChange {
    std::int64_t at = 0;   ///< the first sample at the new level
    std::int64_t end = 0;  ///< the first one at another level again, or beyond the last
    Code before = 0, after = 0;
};

/// A step is looked for in so many samples.
inline constexpr std::int64_t longest_level_samples = std::int64_t{1} << 22;

/// nullopt where the first longest_level_samples are all the same. A pass over what comes before the change, and over
/// at most as many after it.
std::optional<LevelChange> first_level_change(const Plan& plan, const Case& the_case);

/// What a constant is multiplied by; a median leaves it as it is.
double gain_of_constant(const FilterChain& chain);

struct StepWindow {
    /// At most transition_most_samples, from 65536 before the step on; from where nothing is left of the start of the
    /// case, when there is anything.
    SampleWindow window;
    std::int64_t step = 0;  ///< index of the response's first sample that the new level can reach
    /// Of the response: those of the stimulus times the design's gain of a constant.
    StateLevels levels;
};

/// nullopt where the filter does not settle on the level before the step (settling.hpp). `window` may begin behind
/// `step`: then there is no room to settle.
std::optional<StepWindow> step_window(const Plan& plan, const Case& the_case, int channel, const LevelChange& change);

}  // namespace halflsb
