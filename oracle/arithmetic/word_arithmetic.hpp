// Whole numbers on their way into words: exact shifts, roundings and divisions, in 64 or in 128 bits.
//
// `Sum` is std::int64_t or Int128. Nothing here overflows where numbers stay below a quarter of its range.
#pragma once

#include <cstdint>

#include "oracle/filters/stage_arithmetic.hpp"
#include "stimuli/rounding.hpp"
#include "stimuli/wide.hpp"

namespace halflsb {

__extension__ typedef __int128 Int128;

template <class Sum>
struct UnsignedSum;
template <>
struct UnsignedSum<std::int64_t> {
    using type = std::uint64_t;
};
template <>
struct UnsignedSum<Int128> {
    using type = Uint128;
};
template <class Sum>
using UnsignedOf = typename UnsignedSum<Sum>::type;

template <class Sum>
inline constexpr int bits_of = static_cast<int>(sizeof(Sum) * 8);

/// Whether the whole number below a quotient gives way to the next one. The remainder, never 0, against a half is
/// -1, 0 (a tie) or 1.
inline bool rounds_up(Rounding rounding, int remainder_against_half, bool is_negative, bool floor_is_odd) {
    switch (rounding) {
        case Rounding::floor:
            return false;
        case Rounding::toward_zero:
            return is_negative;
        case Rounding::half_up:
            return remainder_against_half >= 0;
        case Rounding::half_away:
            return remainder_against_half > 0 || (remainder_against_half == 0 && !is_negative);
        case Rounding::half_even:
            break;
    }
    return remainder_against_half > 0 || (remainder_against_half == 0 && floor_is_odd);
}

/// number 2^-places, rounded; places >= 0.
template <class Sum>
Sum shifted_down(Sum number, int places, Rounding rounding) {
    using Unsigned = UnsignedOf<Sum>;
    if (places == 0) return number;
    // From here on a half is beyond the number, which then is all remainder.
    if (places >= bits_of<Sum>) {
        if (number == 0) return 0;
        const bool up = rounds_up(rounding, number < 0 ? 1 : -1, number < 0, number < 0);
        return static_cast<Sum>((number < 0 ? -1 : 0) + (up ? 1 : 0));
    }
    const Sum below = number >> places;
    if (rounding == Rounding::floor) return below;
    const Unsigned rest = static_cast<Unsigned>(number) - (static_cast<Unsigned>(below) << places);
    if (rest == 0) return below;
    const Unsigned half = Unsigned{1} << (places - 1);
    const int against_half = rest > half ? 1 : rest == half ? 0 : -1;
    return below + (rounds_up(rounding, against_half, number < 0, (below & 1) != 0) ? 1 : 0);
}

/// number / divisor, rounded; the divisor is positive.
template <class Sum>
Sum divided(Sum number, Sum divisor, Rounding rounding) {
    Sum below = number / divisor;
    Sum rest = number % divisor;
    if (rest == 0) return below;
    if (rest < 0) {
        rest += divisor;
        --below;
    }
    const Sum other = divisor - rest;
    const int against_half = rest > other ? 1 : rest == other ? 0 : -1;
    return below + (rounds_up(rounding, against_half, number < 0, (below & 1) != 0) ? 1 : 0);
}

/// number 2^places on its way into a word of at most 64 bits that overflows in the named way: what does not fit
/// here becomes a number that the word takes to the same one.
template <class Sum>
Sum shifted_up(Sum number, int places, Overflow overflow) {
    constexpr Sum most = Sum{1} << (bits_of<Sum> - 2);
    if (places < bits_of<Sum> - 2 && number <= (most >> places) && number >= -(most >> places)) {
        return static_cast<Sum>(static_cast<UnsignedOf<Sum>>(number) << places);
    }
    if (number == 0) return 0;
    if (overflow == Overflow::saturate) return number < 0 ? -most : most;
    return places < 64 ? static_cast<Sum>(static_cast<std::int64_t>(static_cast<std::uint64_t>(number) << places)) : 0;
}

/// From one number of fraction bits to another.
struct Shift {
    int up = 0;  ///< negative: down, rounded
    Rounding rounding = Rounding::floor;
    Overflow overflow = Overflow::wrap;  ///< of the word that the number goes into

    template <class Sum>
    Sum operator()(Sum number) const {
        if (up == 0) return number;
        return up > 0 ? shifted_up(number, up, overflow) : shifted_down(number, -up, rounding);
    }
};

}  // namespace halflsb
