#include "stimuli/wide.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

using namespace halflsb;

namespace {

constexpr Uint128 top_bit = Uint128{1} << 127;
constexpr Uint128 all_ones = ~Uint128{0};

/// Exact for numbers of at most 53 bits.
double value_of(const Wide& number) { return std::ldexp(static_cast<double>(number.mantissa), number.exponent); }

}  // namespace

TEST_CASE("wide: every double goes in and comes out unchanged", "[stimuli]") {
    for (const double value : {0.0, 1.0, 0.1, 1e300, 1e-300, std::numeric_limits<double>::denorm_min(),
                               std::numeric_limits<double>::max()}) {
        CHECK(value_of(wide(value)) == value);
    }
    CHECK((wide(3.0).mantissa & top_bit) != 0);
}

TEST_CASE("wide: products and quotients of small numbers are exact", "[stimuli]") {
    for (const double a : {1.0, 3.0, 0.375, 1e9, 0x1p-60}) {
        for (const double b : {1.0, 7.0, 0.5, 48000.0}) {
            CHECK(value_of(wide(a) * wide(b)) == a * b);
            CHECK(value_of(wide(a * b) / wide(b)) == a);
        }
    }
    CHECK((wide(0.0) * wide(3.0)).mantissa == 0);
    CHECK((wide(0.0) / wide(3.0)).mantissa == 0);
}

TEST_CASE("wide: a third is binary 0.010101... to all 128 bits", "[stimuli]") {
    const Wide third = wide(1.0) / wide(3.0);
    CHECK(third.exponent == -129);
    CHECK(third.mantissa == (all_ones / 3) * 2);  // 1010...10, truncated
    CHECK(phase_after(third, 1) == all_ones / 3);
}

TEST_CASE("wide: the full product of two all-ones numbers", "[stimuli]") {
    // (2^128 - 1)^2 = 2^256 - 2^129 + 1
    const Uint256 square = full_product(all_ones, all_ones);
    CHECK(square.high == all_ones - 1);
    CHECK(square.low == 1);
    const Uint256 mixed = full_product(top_bit, 6);
    CHECK(mixed.high == 3);
    CHECK(mixed.low == 0);
}

TEST_CASE("wide: a product is split at any binary point", "[stimuli]") {
    const Uint256 bits{5, 7};  // 5 2^128 + 7
    CHECK(split(bits, 0).whole == 7);
    CHECK(split(bits, 0).fraction == 0);
    CHECK(split(bits, -3).whole == 56);
    CHECK(split(bits, -200).whole == 0);
    CHECK(split(bits, 2).whole == ((Uint128{5} << 126) | 1));
    CHECK(split(bits, 2).fraction == Uint128{3} << 126);
    CHECK(split(bits, 128).whole == 5);
    CHECK(split(bits, 128).fraction == 7);
    CHECK(split(bits, 129).whole == 2);
    CHECK(split(bits, 129).fraction == (top_bit | 3));
    CHECK(split(bits, 256).whole == 0);
    CHECK(split(bits, 256).fraction == 5);
    CHECK(split(bits, 258).fraction == 1);
    CHECK(split(bits, 1000).fraction == 0);
}

TEST_CASE("wide: a phase after 2^40 samples keeps more than 64 good bits", "[stimuli]") {
    // 1/12 turn a sample: after n = 12 m + 5 samples the phase is 5/12.
    const Wide step = wide(100.0) / wide(1200.0);
    const Uint128 expected = all_ones / 12 * 5;
    const Uint128 n = (Uint128{1} << 40) / 12 * 12 + 5;
    const Uint128 miss = expected - phase_after(step, n);
    CHECK(miss < Uint128{1} << 48);  // 2^40 times 2^-131, the error of a 128-bit 1/12, is 2^-91
}
