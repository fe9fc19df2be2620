// Numbers of 128 bits by integer arithmetic: what a phase needs to stay good over 1e10 samples, with
// the same bits on every machine.
//
// A phase is kept in turns, not in radians: only its fraction matters, and a fraction of a turn wraps
// as an unsigned integer does. Everything here truncates; the errors stated are bounds.
#pragma once

#include <cstdint>

namespace halflsb {

__extension__ typedef unsigned __int128 Uint128;

/// A fraction of a turn in units of 2^-128. Sums and differences wrap, as turns do.
using TurnFraction = Uint128;

/// mantissa * 2^exponent; never negative. The top bit of the mantissa is set, or all of it is 0.
struct Wide {
    Uint128 mantissa = 0;
    int exponent = 0;
};

/// Exact. `value` must be finite and not negative.
Wide wide(double value);
/// Exact: the number `integer` * 2^exponent.
Wide wide_scaled(Uint128 integer, int exponent);

/// Relative error below 2^-127 each. The divisor must not be 0.
Wide operator*(const Wide& left, const Wide& right);
Wide operator/(const Wide& left, const Wide& right);

/// The 256 bits of left * right.
struct Uint256 {
    Uint128 high = 0;
    Uint128 low = 0;
};

inline Uint256 full_product(Uint128 left, Uint128 right) {
    constexpr Uint128 low_half = ~std::uint64_t{0};
    const Uint128 left_high = left >> 64, left_low = left & low_half;
    const Uint128 right_high = right >> 64, right_low = right & low_half;
    const Uint128 low = left_low * right_low;
    const Uint128 cross = left_high * right_low + (low >> 64);
    const Uint128 middle = left_low * right_high + (cross & low_half);
    return {left_high * right_high + (cross >> 64) + (middle >> 64), middle << 64 | (low & low_half)};
}

/// The upper half of the product: left * right / 2^128.
inline Uint128 high_product(Uint128 left, Uint128 right) { return full_product(left, right).high; }

/// bits / 2^fraction_bits split at the binary point. The whole part keeps its lowest 128 bits; the
/// fraction is truncated to 2^-128. Any fraction_bits.
struct Split {
    Uint128 whole = 0;
    TurnFraction fraction = 0;
};
Split split(const Uint256& bits, int fraction_bits);

/// The phase after `count` samples at `turns_per_sample`: their product modulo 1. Its error is that of
/// turns_per_sample times count, plus 2^-128.
inline TurnFraction phase_after(const Wide& turns_per_sample, Uint128 count) {
    return split(full_product(turns_per_sample.mantissa, count), -turns_per_sample.exponent).fraction;
}

}  // namespace halflsb
