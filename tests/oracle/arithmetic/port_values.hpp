// Codes at an end of a described chain and the values that they stand for, in values of the chain's input.
#pragma once

#include <bit>
#include <cmath>
#include <span>

#include "oracle/arithmetic/described.hpp"

namespace halflsb::testing {

/// values.size() == codes.size(). A code of f32 is the 32 bits of the number.
inline void values_at(const Port& port, std::span<const Code> codes, std::span<double> values) {
    for (std::size_t n = 0; n < codes.size(); ++n) {
        if (port.is_float) {
            values[n] = static_cast<double>(std::bit_cast<float>(codes[n]));
        } else {
            values[n] = std::ldexp(static_cast<double>(codes[n] - port.zero_code), -port.word.fraction_bits);
        }
    }
}

}  // namespace halflsb::testing
