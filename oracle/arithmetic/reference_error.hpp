// What the declared reference itself may be off by: it is computed in double precision.
#pragma once

#include "oracle/arithmetic/exact_chain.hpp"

namespace halflsb {

/// The largest |value| of a port: full scale of its words. 1.0 for f32, 2^(wide_bits) for words that nobody limited.
double largest_value(const Port& port);

/// 0 where every sum of the reference is a whole number of steps below 2^53, as that of an FIR on 16-bit samples; else
/// 2^-42 (2^-50 / (1 - pole radius), where that is more) of the largest output that the input can give, a thousand
/// times what was measured of sections with poles at a cut-off of 0.001 cycles a sample (biquad.hpp), and the double's
/// last place of a moving average.
double reference_error(const DescribedChain& chain, const ExactChain& exact, double largest_input);

}  // namespace halflsb
