// Numbers in messages and docs: the shortest decimal text that reads back as the same number, in any
// locale; whole ones below 10^15 without an exponent.
#pragma once

#include <array>
#include <charconv>
#include <cmath>
#include <string>

namespace halflsb {

inline std::string shown_number(double number) {
    std::array<char, 40> text{};
    const bool whole = std::fabs(number) < 1e15 && number == std::floor(number);
    const auto end = whole ? std::to_chars(text.data(), text.data() + text.size(), number, std::chars_format::fixed).ptr
                           : std::to_chars(text.data(), text.data() + text.size(), number).ptr;
    return std::string(text.data(), end);
}

}  // namespace halflsb
