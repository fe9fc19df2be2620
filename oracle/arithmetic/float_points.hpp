// The rounding points of float32 stages.
//
// Standard model: fl(a op b) = (a op b)(1 + d), |d| <= u = 2^-24 (Higham, Accuracy and Stability of Numerical
// Algorithms, chapters 2 to 4, from memory), and 2^-150 beside it where a product is too small to be normal. Each
// operation errs by at most u times the largest number that it can come to, which follows from the words of the input;
// a term of a sum goes through as many additions as stand behind it. A running sum never forgets what it has lost: its
// limit grows with the length of the record.
#pragma once

#include "oracle/arithmetic/rounding_points.hpp"

namespace halflsb {

struct FloatUse {
    std::int64_t samples = 0;    ///< of the record, for running sums
    double largest_input = 1.0;  ///< |value| of the chain's input
};

/// Points of the float32 stages alone. Sums of whole numbers below 2^24 err nowhere.
std::vector<RoundingPoint> float_points(const DescribedChain& chain, const ExactChain& exact, const FloatUse& use);

}  // namespace halflsb
