// The linear filter that a description computes but for its roundings: exactly the coefficients that are stored, the
// reciprocal of a moving average among them, nothing shortened, nothing clipped. Limits hold against it.
#pragma once

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// Of one described stage: one stage, or two where a stored reciprocal differs from 1 / points (the moving average,
/// then a fir of one tap). float32: coefficients as the float32 that are stored.
FilterChain exact_stages(const DescribedStage& stage);

struct ExactChain {
    FilterChain stages;
    /// first_of[i]: where the stages of described stage i begin; one more at the end.
    std::vector<std::size_t> first_of;
};
ExactChain exact_chain(const DescribedChain& chain);

}  // namespace halflsb
