// How coefficients became whole numbers, one thing otherwise at a time: their scale, their rounding, their word length,
// and the shift that takes the scale back.
#pragma once

#include <vector>

#include "oracle/explain/hypothesis.hpp"

namespace halflsb {

/// Of every stage that stores its coefficients as whole numbers.
std::vector<Hypothesis> coefficient_changes(const Hypothesis& from);

/// The stage and its arithmetic say the same number.
void set_coefficient_fraction_bits(FilterStage& stage, int bits);

}  // namespace halflsb
