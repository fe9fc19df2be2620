// How near the words of a filter's nodes come to their ends, and how wide they would have to be.
#pragma once

#include <vector>

#include "runner/world/prediction.hpp"

namespace halflsb {

/// Stimuli are told with at most so many samples; a longer one would come to hardly more.
inline constexpr std::size_t most_signs = 4096;

/// Every node that has words, in the order of the signal; accumulators and states whose width the plan does not say
/// are among them, without bits.
std::vector<PredictedNode> predict_nodes(const DescribedChain& described);

/// Of each CIC of whole numbers: its integrators and combs in the order of the signal.
std::vector<PredictedRegister> predict_registers(const DescribedChain& described);

/// Of each stage that stores coefficients with a number of fraction bits that is said.
std::vector<PredictedCoefficients> predict_coefficients(const DescribedChain& described);

}  // namespace halflsb
