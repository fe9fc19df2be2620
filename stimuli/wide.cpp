#include "stimuli/wide.hpp"

#include <cassert>
#include <cmath>

namespace halflsb {

namespace {

constexpr Uint128 top_bit = Uint128{1} << 127;

Uint128 shifted_left(Uint128 bits, int count) { return count >= 128 ? 0 : bits << count; }
Uint128 shifted_right(Uint128 bits, int count) { return count >= 128 ? 0 : bits >> count; }

}  // namespace

Wide wide_scaled(Uint128 integer, int exponent) {
    if (integer == 0) return {};
    while ((integer & top_bit) == 0) {
        integer <<= 1;
        --exponent;
    }
    return {integer, exponent};
}

Wide wide(double value) {
    assert(value >= 0.0 && std::isfinite(value));
    int exponent = 0;
    const double fraction = std::frexp(value, &exponent);  // 1/2 <= fraction < 1, exact
    return wide_scaled(static_cast<std::uint64_t>(fraction * 0x1p53), exponent - 53);
}

Wide operator*(const Wide& left, const Wide& right) {
    Uint256 product = full_product(left.mantissa, right.mantissa);
    int exponent = left.exponent + right.exponent + 128;
    if (product.high != 0 && (product.high & top_bit) == 0) {
        product.high = product.high << 1 | product.low >> 127;
        --exponent;
    }
    return product.high == 0 ? Wide{} : Wide{product.high, exponent};
}

Wide operator/(const Wide& left, const Wide& right) {
    assert(right.mantissa != 0);
    if (left.mantissa == 0) return {};
    // Long division bit by bit until 128 bits stand; done once per stimulus, so speed does not matter.
    int exponent = left.exponent - right.exponent;
    Uint128 quotient = 0;
    Uint128 remainder = left.mantissa;
    if (remainder >= right.mantissa) {
        quotient = 1;
        remainder -= right.mantissa;
    }
    while ((quotient & top_bit) == 0) {
        const bool carry = (remainder & top_bit) != 0;
        remainder <<= 1;
        quotient <<= 1;
        --exponent;
        if (carry || remainder >= right.mantissa) {
            remainder -= right.mantissa;
            quotient |= 1;
        }
    }
    return {quotient, exponent};
}

Split split(const Uint256& bits, int fraction_bits) {
    if (fraction_bits <= 0) return {shifted_left(bits.low, -fraction_bits), 0};
    if (fraction_bits < 128) {
        return {bits.low >> fraction_bits | bits.high << (128 - fraction_bits), bits.low << (128 - fraction_bits)};
    }
    const int beyond = fraction_bits - 128;
    if (beyond == 0) return {bits.high, bits.low};
    if (beyond < 128) return {bits.high >> beyond, bits.high << (128 - beyond) | bits.low >> beyond};
    return {0, shifted_right(bits.high, beyond - 128)};
}

}  // namespace halflsb
