#include "stimuli/number_text.hpp"

#include <array>
#include <charconv>
#include <cmath>

namespace halflsb {

std::string number_text(double value) {
    std::array<char, 32> text{};
    // A whole number is written out: 10000000000, not 1e+10.
    const bool whole = std::abs(value) < 0x1p53 && std::floor(value) == value;
    const auto end = whole ? std::to_chars(text.data(), text.data() + text.size(), value, std::chars_format::fixed).ptr
                           : std::to_chars(text.data(), text.data() + text.size(), value).ptr;
    return std::string(text.data(), end);
}

}  // namespace halflsb
