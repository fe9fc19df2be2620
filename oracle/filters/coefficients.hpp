// Coefficients as a firmware stores them: whole multiples of 2^-fraction_bits.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// `coefficient` rounded to a multiple of 2^-fraction_bits, 0 .. 62. Exact on every machine.
double rounded_coefficient(double coefficient, int fraction_bits, Rounding rounding = Rounding::half_away);

/// The stage with what its firmware stores rounded to its coefficient_fraction_bits by its coefficient_rounding, a1 and
/// a2 with the sign in which they are stored: the taps of an FIR, whether it changes the rate or not; b and a of a
/// recursion, a[0] = 1 not among them; b0 b1 b2 a1
/// a2 of each section (a DC blocker has r, and with unity gain (1 + r) / 2; a notch all five); k of a one-pole,
/// whose pole is then 1 - k; direct, forward and feedback of a comb. Unchanged without bits, and what
/// has no coefficients always: moving average, median, CIC.
FilterStage with_rounded_coefficients(const FilterStage& stage);

}  // namespace halflsb
