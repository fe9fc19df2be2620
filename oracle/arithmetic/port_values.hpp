// Codes at an end of a described chain and the values that they stand for, in values of the chain's input.
#pragma once

#include <span>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// values.size() == codes.size(). A code of f32 is the 32 bits of the number.
void values_at(const Port& port, std::span<const Code> codes, std::span<double> values);

}  // namespace halflsb
