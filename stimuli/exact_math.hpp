// Sine, logarithm and powers of two from + - * / and integers alone: the same bits on every machine
// and compiler, which the C library's functions are not. Needs IEEE 754 doubles, rounding to nearest
// and no contraction (-ffp-contract=off).
#pragma once

#include "stimuli/wide.hpp"

namespace halflsb {

/// sin(2 pi phase). Folded to an eighth of a turn in integers, the angle and its square carried as sums
/// of two doubles, then the Taylor series to the 17th (sine) or 18th power (cosine).
/// Error: series cut off below 2^-63, rounding below 0.68 ulp, so less than 7.6e-17 in all (7.0e-17 was
/// the largest of 23,000 phases against 60 digits). Odd, symmetric about a quarter of a turn, exact
/// at each quarter, 1/2 at a twelfth.
double sine_of_turns(TurnFraction phase);
/// cos(2 pi phase), the sine a quarter of a turn later.
inline double cosine_of_turns(TurnFraction phase) { return sine_of_turns(phase + (Uint128{1} << 126)); }

/// The natural logarithm of a positive, finite, normal double. 2 atanh(f / (2 + f)) by its series,
/// f = m - 1 and value = m 2^k with m in [sqrt(1/2), sqrt(2)), arranged so that only corrections to f
/// round (P. T. P. Tang, 1990). Error below 1 ulp
/// (0.76 was the largest of 22,000).
double natural_log(double value);

/// 2^x for x = fraction / 2^128, in units of 2^-127, so from 2^127 up. Two tables of 256 entries and
/// a series of 7 terms (the table method of P. T. P. Tang, 1989, in integers). Relative error below
/// 2^-123.
Uint128 exp2_of_fraction(Uint128 fraction);

/// The natural logarithm of a ratio of at least 1, by the atanh series in integers. Absolute error
/// below 2^-124 for a ratio below 2, else 2^-115.
Wide natural_log(const Wide& ratio);

/// ln 2, relative error below 2^-128.
Wide natural_log_of_two();

}  // namespace halflsb
