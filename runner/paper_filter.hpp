// A filter on paper: gain, phase, delay, step response, and what the word length costs.
#pragma once

#include <optional>

#include "oracle/arithmetic/described.hpp"
#include "runner/world/prediction.hpp"

namespace halflsb {

/// All but `channels` and `arithmetic`. `described` is the arithmetic of the chain, nullptr where it cannot be
/// described. What cannot be told of a median or a changed rate is left out, and `missing` says why.
PredictedFilter predict_filter(const FilterChain& chain, const DescribedChain* described, const Signal& signal);

/// What an output LSB is worth as a value of the chain's input; of f32 what a value of the output is worth.
double output_worth(const Signal& signal);

}  // namespace halflsb
