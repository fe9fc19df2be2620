// The quantile of the standard normal distribution.
#pragma once

namespace halflsb {

/// z with P(Z > z) = upper_tail, for 2^-54 <= upper_tail <= 1/2 a multiple of 2^-54, so 0 <= z < 8.3.
/// Algorithm AS 241, PPND16 (M. J. Wichura, Applied Statistics 37, 1988), on exact_math's logarithm.
/// Relative error below 1e-15 (the published coefficients are good to 1e-16, the rest is rounding).
double normal_quantile_of_upper_tail(double upper_tail);

}  // namespace halflsb
