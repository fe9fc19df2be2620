// What follows from the arithmetic that a plan promises: error bounds point by point, levels node by node, silence.
#pragma once

#include <functional>
#include <vector>

#include "runner/world/prediction.hpp"

namespace halflsb {

/// What is taken for the words that the plan does not say, stage by stage; none of a stage that says all.
std::vector<PredictedAssumption> assumptions_of(const DescribedChain& chain);

/// Of the plan's filter as `channel` has it; cases with a filter of their own are told by their own bounds. Costs the
/// impulse responses of all paths for each kind of case. `go_on` is asked between cases.
PredictedArithmetic predict_arithmetic(const Plan& plan, const DescribedChain& described, int channel,
                                       const std::vector<std::size_t>& selected, const std::function<bool()>& go_on);

/// What the plan's rules would see, over the selected cases as far as the budget of samples goes.
PredictedSight predict_sight(const Plan& plan, const std::vector<std::size_t>& selected,
                             const std::function<bool()>& go_on);

}  // namespace halflsb
