// Coefficients as a firmware stores them: whole multiples of 2^-fraction_bits.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// The multiple of 2^-fraction_bits nearest to `coefficient`, ties away from zero. fraction_bits is
/// 0 .. 62. Exact on every machine: only powers of two and std::round are used.
double rounded_coefficient(double coefficient, int fraction_bits);

/// The stage with its taps, or b0 b1 b2 a1 a2 of each section, rounded to its
/// coefficient_fraction_bits; unchanged without them, and a moving average always.
FilterStage with_rounded_coefficients(const FilterStage& stage);

}  // namespace halflsb
