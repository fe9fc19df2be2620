// Quantiles of the distributions that intervals are made from. Boost.Math computes them; only this file's source sees
// it.
#pragma once

namespace halflsb {

/// The z that a standard normal exceeds with this probability, 0 < probability < 1; exact in the far tail.
double normal_quantile_above(double probability);

/// The same for Student's t; degrees > 0, also between whole numbers (Satterthwaite 1946 gives such).
/// Infinite for degrees <= 0 or NaN: with no degrees of freedom nothing is known.
double student_quantile_above(double probability, double degrees);

/// The value that chi-square of so many degrees (> 0) exceeds with this probability.
double chi_square_quantile_above(double probability, double degrees);

}  // namespace halflsb
