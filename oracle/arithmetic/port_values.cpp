#include "oracle/arithmetic/port_values.hpp"

#include <bit>
#include <cmath>

namespace halflsb {

void values_at(const Port& port, std::span<const Code> codes, std::span<double> values) {
    for (std::size_t n = 0; n < codes.size(); ++n) {
        if (port.is_float) {
            values[n] = static_cast<double>(std::bit_cast<float>(codes[n]));
        } else {
            values[n] = std::ldexp(static_cast<double>(codes[n] - port.zero_code), -port.word.fraction_bits);
        }
    }
}

}  // namespace halflsb
