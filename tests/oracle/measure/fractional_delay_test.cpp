// Fractions of a sample that are exact by construction, and how often their interval holds.
#include "oracle/measure/fractional_delay.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>
#include <vector>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using halflsb::testing::Gaussian;

namespace {

/// Noise at twice the rate, and nothing above 0.43 of the rate of each half of it: a windowed sinc (Blackman, 63
/// points, -74 dB). Its even samples and its odd ones are one signal, half a sample apart.
std::vector<double> doubled_noise(std::size_t samples, Gaussian& normal) {
    constexpr int points = 63;
    static const std::vector<double> taps = [] {
        std::vector<double> made;
        for (int i = 0; i < points; ++i) {
            const double at = i - (points - 1) / 2.0, part = 2.0 * std::numbers::pi * i / (points - 1);
            const double sinc =
                at == 0.0 ? 0.34 : std::sin(2.0 * std::numbers::pi * 0.17 * at) / (std::numbers::pi * at);
            made.push_back(sinc * (0.42 - 0.5 * std::cos(part) + 0.08 * std::cos(2.0 * part)));
        }
        return made;
    }();
    std::vector<double> white(samples + points), out(samples);
    for (double& value : white) value = normal.next();
    for (std::size_t n = 0; n < samples; ++n) {
        for (std::size_t i = 0; i < taps.size(); ++i) out[n] += taps[i] * white[n + i];
    }
    return out;
}

/// The response is the reference half a sample later when `is_late`, and noise.
std::optional<FractionalDelay> measured(bool is_late, double deviation, std::size_t samples, Gaussian& normal) {
    const std::vector<double> doubled = doubled_noise(2 * samples + 2, normal);
    std::vector<double> reference, error;
    for (std::size_t n = 0; n < samples; ++n) {
        reference.push_back(doubled[2 * n + 1]);
        const double response = doubled[is_late ? 2 * n : 2 * n + 1] + deviation * normal.next();
        error.push_back(response - reference.back());
    }
    const auto measure = make_welch_response(64);
    measure->add(reference, error);
    measure->finish();
    return fractional_delay(measure->sums());
}

}  // namespace

TEST_CASE("fractional delay: half a sample is half a sample, and none is none", "[measure]") {
    Gaussian normal(11);
    const auto half = measured(true, 0.01, 20000, normal), none = measured(false, 0.01, 20000, normal);
    REQUIRE(half);
    REQUIRE(none);
    CHECK(half->samples == Approx(0.5).margin(5.0 * half->standard_uncertainty));
    CHECK(half->standard_uncertainty < 1e-3);
    CHECK(none->samples == Approx(0.0).margin(5.0 * none->standard_uncertainty));
    // What the low-pass takes away is in no bin that counts.
    CHECK(half->to_cycles_per_sample < 0.45);
    const auto exact = measured(false, 0.0, 20000, normal);
    REQUIRE(exact);
    CHECK(exact->samples == 0.0);
    CHECK(exact->standard_uncertainty == 0.0);
}

TEST_CASE("fractional delay: noise alone tells nothing", "[measure]") {
    Gaussian normal(12);
    CHECK_FALSE(measured(true, 100.0, 4096, normal));
}

TEST_CASE("fractional delay: the interval of 95 % holds the truth as often on 2000 boards", "[measure]") {
    const int boards = test::rounds_of(2000);
    Gaussian normal(13);
    for (const bool is_late : {false, true}) {
        int held = 0;
        for (int board = 0; board < boards; ++board) {
            const auto delay = measured(is_late, 0.05, 4096, normal);
            REQUIRE(delay);
            held += testing::holds(delay->samples, delay->standard_uncertainty, is_late ? 0.5 : 0.0);
        }
        CHECK(testing::holds_95_percent(held, boards));
    }
}
