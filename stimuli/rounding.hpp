// Named roundings from a real number to a whole one. All are exact on every machine.
#pragma once

#include <optional>
#include <string_view>
#include <vector>

namespace halflsb {

enum class Rounding {
    floor,        ///< toward minus infinity: what an arithmetic right shift does
    toward_zero,  ///< what a C cast or integer division does
    half_up,      ///< floor(x + 1/2): add half, then shift
    half_away,    ///< nearest, ties away from zero: lround
    half_even,    ///< nearest, ties to even: IEEE 754 default
};

/// Plan words, in the order of the enumeration: "floor", "toward-zero", "half-up", ...
const std::vector<std::string_view>& rounding_names();
std::string_view name_of(Rounding rounding);
std::optional<Rounding> rounding_from(std::string_view name);

/// The whole number that `value` rounds to, as a double. |value| must be below 2^52 (a sum
/// value + 1/2 is then exact where it matters); NaN gives NaN.
double round_to_whole(double value, Rounding rounding);

}  // namespace halflsb
