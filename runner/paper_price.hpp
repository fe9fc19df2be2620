// What the word length of the coefficients costs, before any rounding of samples: design -> declared.
#pragma once

#include <vector>

#include "runner/world/prediction.hpp"

namespace halflsb {

/// Linear chains of one rate. Gains are compared on a grid of frequencies that holds the peak of every pole pair.
PredictedPrice price_of(const FilterChain& design, const FilterChain& declared, const Signal& signal);

/// Stages in b/a form that lose more than half an output LSB in their own recursion, computed in double precision, for
/// some input of full scale (recursion_loss).
std::vector<RecursionWarning> recursion_warnings(const FilterChain& chain, const Signal& signal);

}  // namespace halflsb
