#include "oracle/filters/design_math.hpp"

#include "oracle/filters/octave_band.hpp"
#include "oracle/filters/recursive_design.hpp"
#include "oracle/filters/section_loss.hpp"
#include "oracle/filters/weighting.hpp"
#include "oracle/filters/windowed_sinc.hpp"
#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("design math: against figures of 25 digits", "[filters]") {
    // mpmath 1.2 at 50 digits: mp.tan(mp.pi * f), mp.exp(x), 10**(x/20), b**x, mp.sinh(x), mp.asinh(x) of the doubles.
    CHECK_THAT(warped(0.001, 1.0), Catch::WithinRel(0.003141602989056156191439523, 3e-16));
    CHECK_THAT(warped(0.4999, 1.0), Catch::WithinRel(3183.098757118501474505947, 1e-13));
    CHECK_THAT(exponential(-3.7), Catch::WithinRel(0.02472352647033938681097685, 3e-16));
    CHECK_THAT(exponential(20.25), Catch::WithinRel(622964442.1984454836539383, 3e-16));
    CHECK_THAT(ratio_of_db(-60.5), Catch::WithinRel(0.0009440608762859233803643805, 3e-16));
    CHECK_THAT(ratio_of_db(0.001), Catch::WithinRel(1.000115135882276682529145, 3e-16));
    CHECK_THAT(power(1.58, 0.4996667741545416), Catch::WithinRel(1.256788927362740902460254, 4e-16));
    CHECK_THAT(power(0.3, 2.5), Catch::WithinRel(0.04929503017546494565042082, 4e-16));
    CHECK_THAT(power(0.3, -2.5), Catch::WithinRel(1.0 / 0.04929503017546494565042082, 4e-16));
    for (const auto& [x, value] : {std::pair{1e-9, 1.000000000000000062448258e-9},
                                   {0.3, 0.3045202934471426073528464},
                                   {0.5, 0.5210953054937473616224256},
                                   {0.7, 0.7585837018395334477191735},
                                   {5.0, 74.20321057778875897700947}}) {
        CHECK_THAT(hyperbolic_sine(x), Catch::WithinRel(value, 9e-16));
        CHECK(hyperbolic_sine(-x) == -hyperbolic_sine(x));
    }
    for (const auto& [x, value] : {std::pair{1e-9, 1.000000000000000062114925e-9},
                                   {1e-4, 0.00009999999983333333887550691},
                                   {0.3, 0.2956730475634224284687026},
                                   {1.0, 0.8813735870195430252326093},
                                   {50.0, 4.605270170991423826621239}}) {
        CHECK_THAT(inverse_hyperbolic_sine(x), Catch::WithinRel(value, 9e-16));
        CHECK(inverse_hyperbolic_sine(-x) == -inverse_hyperbolic_sine(x));
    }
    CHECK(ratio_of_db(0.0) == 1.0);
    CHECK(power_of_ten(-2.0, 1.0) == 0.01);
}

TEST_CASE("design math: a complex root squared is its square, and lies in the right half-plane", "[filters]") {
    const std::uint64_t seed = 5;
    INFO("seed " << seed);
    Random random(seed);
    for (int i = 0; i < 2000; ++i) {
        // Parts of very different sizes: neither may lose digits to the other.
        const Complex root{std::ldexp(random.between(0.5, 1.0), static_cast<int>(random.whole(-20, 0))),
                           std::ldexp(random.ratio(), static_cast<int>(random.whole(-20, 0)))};
        const double re = root.re * root.re - root.im * root.im;
        const Complex seen = square_root({re, 2.0 * root.re * root.im});
        CHECK(seen.re >= 0.0);
        CHECK_THAT(seen.re,
                   Catch::WithinRel(root.re, 1e-15 * (1.0 + square_of_size(root) / std::max(std::fabs(re), 1e-9))));
        CHECK_THAT(seen.im,
                   Catch::WithinRel(root.im, 1e-15 * (1.0 + square_of_size(root) / std::max(std::fabs(re), 1e-9))));
    }
    CHECK(square_root({-4.0, 0.0}).im == 2.0);
    CHECK(square_root({}).re == 0.0);
}

TEST_CASE("section loss: half an ulp of each coefficient over the least |A|", "[filters]") {
    CHECK(loss_of({}) == 0.0);
    CHECK(loss_of({{1.0, 0.0, 0.0, 0.0, 0.0}}) == 0.0);
    // 1 - 0.75 z^-1: least 1/4 at zero frequency, half an ulp of 0.75 is 2^-54.
    CHECK(loss_of({{1.0, 0.0, 0.0, -0.75, 0.0}}) == 0x1p-52);
    CHECK(loss_of({{1.0, 0.0, 0.0, 0.75, 0.0}}) == 0x1p-52);
    // Poles +-0.9 j: |A| = 1 - 0.81 at a quarter of the rate.
    CHECK_THAT(loss_of({{1.0, 0.0, 0.0, 0.0, 0.81}}), Catch::WithinRel(0x1p-54 / 0.19, 1e-14));
    CHECK(loss_of({{1.0, 0.0, 0.0, 0.0, 1.0}}) == no_limit);
    CHECK(loss_of({{1.0, 0.0, 0.0, -2.0, 1.0}}) == no_limit);
    // Any frequency, any section: the least |A| of a fine grid, |A|^2 = |1 + a1 z^-1 + a2 z^-2|^2 in sine and cosine.
    std::vector<double> cosines, sines;
    for (int k = 0; k <= 20000; ++k) {
        cosines.push_back(std::cos(6.283185307179586 * k / 40000.0));
        sines.push_back(std::sin(6.283185307179586 * k / 40000.0));
    }
    const std::uint64_t seed = 6;
    INFO("seed " << seed);
    Random random(seed);
    for (int i = 0; i < 200; ++i) {
        const double radius = random.between(0.05, 0.99), turn = random.between(0.0, 0.5);
        BiquadSection s{1.0, 0.0, 0.0, -2.0 * radius * std::cos(6.283185307179586 * turn), radius * radius};
        if (i % 3 == 0) s.a1 = random.ratio() * (1.0 + s.a2) * 0.999;
        double least_square = 100.0;
        for (std::size_t k = 0; k < cosines.size(); ++k) {
            const double c = cosines[k];
            const double real = 1.0 + s.a1 * c + s.a2 * (2.0 * c * c - 1.0);
            const double imaginary = sines[k] * (s.a1 + 2.0 * s.a2 * c);
            least_square = std::min(least_square, real * real + imaginary * imaginary);
        }
        const double least = std::sqrt(least_square);
        const double ulps = std::ldexp(1.0, std::ilogb(s.a1) - 53) + std::ldexp(1.0, std::ilogb(s.a2) - 53);
        CHECK_THAT(loss_of({s}), Catch::WithinRel(ulps / least, 1e-4));
    }
}
