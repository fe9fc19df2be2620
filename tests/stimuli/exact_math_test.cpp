#include "stimuli/exact_math.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "stimuli/inverse_normal.hpp"

using namespace halflsb;

namespace {

constexpr Uint128 turn_part(unsigned numerator, unsigned denominator_log2) {
    return Uint128{numerator} << (128 - denominator_log2);
}

/// floor(2^128 numerator / 12)
Uint128 twelfths(unsigned numerator) {
    return (~Uint128{0} / 12) * numerator;  // below the true value by less than 2^-120 turns
}

}  // namespace

TEST_CASE("exact math: a sine is exact at each quarter of a turn and 1/2 at a twelfth", "[stimuli]") {
    CHECK(sine_of_turns(0) == 0.0);
    CHECK(sine_of_turns(turn_part(1, 2)) == 1.0);
    CHECK(sine_of_turns(turn_part(2, 2)) == 0.0);
    CHECK(sine_of_turns(turn_part(3, 2)) == -1.0);
    CHECK(cosine_of_turns(0) == 1.0);
    CHECK(cosine_of_turns(turn_part(1, 1)) == -1.0);
    CHECK(sine_of_turns(twelfths(1)) == 0.5);
    CHECK(sine_of_turns(twelfths(5)) == 0.5);
    CHECK(sine_of_turns(twelfths(7)) == -0.5);
    // sqrt(1/2), correctly rounded, from either side of the eighth where the series changes.
    CHECK(sine_of_turns(turn_part(1, 3)) == std::sqrt(0.5));
    CHECK(sine_of_turns(turn_part(3, 3)) == std::sqrt(0.5));
    CHECK(sine_of_turns(turn_part(5, 3)) == -std::sqrt(0.5));
}

TEST_CASE("exact math: a sine is odd, repeats mirrored in a half turn, and never exceeds 1", "[stimuli]") {
    Uint128 phase = 1;
    for (int i = 0; i < 5000; ++i) {
        // Knuth's multiplier on each half: any well spread phases do.
        phase = phase * ((Uint128{6364136223846793005U} << 64) | 1442695040888963407U) + 1;
        const double value = sine_of_turns(phase);
        REQUIRE(std::abs(value) <= 1.0);
        REQUIRE(sine_of_turns(0 - phase) == -value);
        REQUIRE(sine_of_turns(turn_part(1, 1) - phase) == value);
        REQUIRE(sine_of_turns(phase + turn_part(1, 1)) == -value);
        // sin^2 + cos^2: each factor is off by at most 7.6e-17, so the sum by 2 * 7.6e-17 * sqrt(2)
        // and three roundings of at most 1.2e-16.
        const double cosine = cosine_of_turns(phase);
        REQUIRE(std::abs(value * value + cosine * cosine - 1.0) < 5.8e-16);
    }
}

TEST_CASE("exact math: the sine agrees with the C library to its ulp", "[stimuli]") {
    // The library rounds the angle to a double first: up to 2 pi / 2 * 2^-53 of 2 pi, 3.5e-16 for the
    // angle and 1.2e-16 for its own ulp.
    for (int i = 0; i < 1000; ++i) {
        const double turns = i / 1000.0;
        const double angle = 6.283185307179586 * turns;
        REQUIRE(std::abs(sine_of_turns(phase_after(wide(turns), 1)) - std::sin(angle)) < 1.2e-15);
    }
}

TEST_CASE("exact math: the logarithm meets known values and the law of products", "[stimuli]") {
    CHECK(natural_log(1.0) == 0.0);
    CHECK(natural_log(2.0) == 0x1.62e42fefa39efp-1);  // COMPUTED, mpmath
    CHECK(natural_log(0.5) == -0x1.62e42fefa39efp-1);
    CHECK(natural_log(10.0) == 0x1.26bb1bbb55516p+1);      // COMPUTED, mpmath
    CHECK(natural_log(0x1p-54) == -0x1.2b708872320e2p+5);  // COMPUTED, mpmath
    // log(1 + x) = x - x^2 / 2 to the last bit for the smallest x.
    CHECK(natural_log(1.0 + 0x1p-52) == 0x1p-52 - 0x1p-105);
    CHECK(natural_log(1.0 - 0x1p-53) == -0x1p-53 - 0x1p-107);
    for (int i = 1; i < 2000; ++i) {
        const double x = i * 0.37, y = 5.0 / i;
        // Three logarithms within 1 ulp (at most 8.9e-16 below 8) and the rounding of x y, 1.1e-16.
        REQUIRE(std::abs(natural_log(x) + natural_log(y) - natural_log(x * y)) < 3.6e-15);
    }
}

TEST_CASE("exact math: powers of two meet the roots and multiply", "[stimuli]") {
    const Uint128 one = Uint128{1} << 127;
    CHECK(exp2_of_fraction(0) == one);
    // The square of 2^(1/2) is 2, within twice the stated 2^-123.
    const Uint128 root = exp2_of_fraction(one);
    const Uint128 square = high_product(root, root);  // units of 2^-126, so 2 is 2^127
    CHECK((square > one ? square - one : one - square) < Uint128{1} << 6);
    // 2^x 2^(1 - x) = 2, one table entry after the other and between them.
    for (unsigned i = 1; i < 4096; ++i) {
        const Uint128 x = (Uint128{i} << 116) + i;
        const Uint128 product = high_product(exp2_of_fraction(x), exp2_of_fraction(0 - x));
        REQUIRE((product > one ? product - one : one - product) < Uint128{1} << 6);
    }
}

TEST_CASE("exact math: the wide logarithm undoes the wide power", "[stimuli]") {
    for (unsigned i = 1; i < 256; ++i) {
        const Uint128 x = Uint128{i} << 120;
        // ln(2^x 2^k) / ln 2 = x + k.
        for (const int k : {0, 1, 40}) {
            const Wide log = natural_log(Wide{exp2_of_fraction(x), k - 127}) / natural_log_of_two();
            const Split octaves = split({0, log.mantissa}, -log.exponent);
            const Uint128 miss = octaves.fraction - x;  // wraps
            INFO(i << " " << k);
            // 2^-115 / ln 2 for the logarithm, 2^-123 / ln 2 for the power.
            CHECK((miss + (Uint128{1} << 14)) < Uint128{1} << 15);
            CHECK(octaves.whole == static_cast<Uint128>(static_cast<unsigned>(k)));
        }
    }
}

TEST_CASE("normal quantile: the percentage points of printed tables", "[stimuli]") {
    // COMPUTED with mpmath, 17 digits; the tail is rounded to the multiple of 2^-54 the function needs,
    // which moves z by at most 2^-55 / density(z): 3e-17 / 0.0058 at 2.9. 1e-15 relative is the stated error.
    const auto tail = [](double p) { return std::floor(p * 0x1p54) * 0x1p-54; };
    CHECK(normal_quantile_of_upper_tail(0.5) == 0.0);
    CHECK(std::abs(normal_quantile_of_upper_tail(0.25) - 0.67448975019608174) < 1e-15);
    CHECK(std::abs(normal_quantile_of_upper_tail(tail(0.1)) - 1.2815515655446004) < 2e-15);
    CHECK(std::abs(normal_quantile_of_upper_tail(tail(0.025)) - 1.9599639845400543) < 3e-15);
    CHECK(std::abs(normal_quantile_of_upper_tail(tail(0.001)) - 3.0902323061678135) < 2e-14);
    CHECK(std::abs(normal_quantile_of_upper_tail(0x1p-54) - 8.2923610758135955) < 1e-14);
}

TEST_CASE("normal quantile: it falls without a jump where its three pieces meet", "[stimuli]") {
    for (const double joint : {0.075, 0x1p-36 * 0.95}) {  // 0.5 - 0.425, and exp(-25) = 1.4e-11 = 2^-36.07
        double before = normal_quantile_of_upper_tail(joint * 0.9);
        for (int i = 1; i <= 2000; ++i) {
            const double p = std::floor(joint * (0.9 + 1e-4 * i) * 0x1p54) * 0x1p-54;
            const double z = normal_quantile_of_upper_tail(p);
            REQUIRE(z < before);
            // The slope of ln p against z is at least z, so 1e-4 of p moves z by less than 1.2e-4 / z.
            REQUIRE(before - z < 1.2e-4 / z + 1e-7);
            before = z;
        }
    }
}
