#include "oracle/measure/response_estimate.hpp"

#include <array>
#include <catch2/catch.hpp>
#include <functional>
#include <numbers>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr double pi = std::numbers::pi;
using Complex = std::complex<double>;

// The design, and a board that has other taps: what lies between them is what is estimated.
constexpr std::array design_taps{0.5, 0.5, 0.0};
constexpr std::array board_taps{0.5, 0.52, -0.1};

Complex response_of(const std::array<double, 3>& taps, double f) {
    const Complex z = std::polar(1.0, -2.0 * pi * f);
    return taps[0] + (taps[1] + taps[2] * z) * z;
}

std::vector<double> filtered(const std::array<double, 3>& taps, const std::vector<double>& x) {
    std::vector<double> y(x.size());
    for (std::size_t n = 0; n < x.size(); ++n) {
        for (std::size_t k = 0; k < taps.size() && k <= n; ++k) y[n] += taps[k] * x[n - k];
    }
    return y;
}

// What the board adds to its response.
using Rest = std::function<double(double value, Gaussian&)>;

double added_noise(double value, Gaussian& normal) { return value + 0.02 * normal.next(); }
// A coarse output of 6 bits, so coarse that its error is no noise.
double rounded(double value, Gaussian&) { return std::floor(value * 32.0 + 0.5) / 32.0; }
// Distortion: its power follows the stimulus, which a variance of one figure for all levels would miss.
double bent(double value, Gaussian&) { return value + 0.05 * value * value; }

std::vector<double> error_of(const std::vector<double>& x, const Rest& rest, Gaussian& normal) {
    std::vector<double> error = filtered(board_taps, x);
    const std::vector<double> design = filtered(design_taps, x);
    for (std::size_t n = 0; n < x.size(); ++n) error[n] = rest(error[n], normal) - design[n];
    return error;
}

struct Held {
    int gain = 0, phase = 0, wrongly_below = 0, wrongly_above = 0;
};

void count(Held& held, const ResponseSums& sums, std::size_t point) {
    const double f = sums.cycles_per_sample[point];
    const Complex design = response_of(design_taps, f), truth = response_of(board_taps, f);
    const ResponseEstimate estimate = estimate_of(sums, point);
    const Interval gain = gain_interval(design, estimate, 0.95), phase = phase_interval(design, estimate, 0.95);
    held.gain += gain.low <= std::abs(truth) && std::abs(truth) <= gain.high;
    const double turned = std::arg(truth * std::conj(design));
    held.phase += phase.low <= turned && turned <= phase.high;
    held.wrongly_below += std::abs(truth) > gain_surely_below(design, estimate, 0.05);
    held.wrongly_above += std::abs(truth) < gain_surely_above(design, estimate, 0.05);
}

void check(const Held& held, int boards) {
    const double band = band_of_95_percent(boards);
    CHECK(holds_95_percent(held.gain, boards));
    CHECK(holds_95_percent(held.phase, boards));
    CHECK(held.wrongly_below / static_cast<double>(boards) < 0.05 + band);
    CHECK(held.wrongly_above / static_cast<double>(boards) < 0.05 + band);
}

std::vector<double> tones_of_phases(const std::vector<double>& tones, std::size_t length, Random& random) {
    std::vector<double> x(length);
    for (const double tone : tones) {
        const double phase = random.between(0.0, 1.0);
        for (std::size_t n = 0; n < length; ++n)
            x[n] += 0.3 * std::sin(2.0 * pi * (std::fmod(tone * static_cast<double>(n), 1.0) + phase));
    }
    return x;
}

}  // namespace

TEST_CASE("response estimate: 95 % intervals from noise hold the true gain and phase of 95 % of 2000 boards",
          "[measure]") {
    const Rest rest = GENERATE(Rest(added_noise), Rest(rounded), Rest(bent));
    const int boards = test::rounds_of(2000);
    Random random(20);
    Gaussian normal(120);
    std::array<Held, 3> held;
    const std::array<std::size_t, 3> points{5, 16, 25};
    for (int board = 0; board < boards; ++board) {
        // 63 segments of 64, at 50 % overlap.
        std::vector<double> x(2048);
        for (double& sample : x) sample = 0.9 * random.ratio();
        const auto measure = make_welch_response(64);
        measure->add(x, error_of(x, rest, normal));
        measure->finish();
        const ResponseSums& sums = measure->sums();
        for (std::size_t i = 0; i < points.size(); ++i) count(held[i], sums, points[i]);
    }
    for (const Held& of_point : held) check(of_point, boards);
}

TEST_CASE("response estimate: tones of random phases say it across realisations", "[measure]") {
    const Rest rest = GENERATE(Rest(added_noise), Rest(rounded));
    const std::vector<double> tones{0.05, 0.13, 0.31};
    const int boards = test::rounds_of(2000);
    Random random(21);
    Gaussian normal(121);
    std::array<Held, 3> held;
    for (int board = 0; board < boards; ++board) {
        constexpr std::size_t realisation = 128, realisations = 16;
        const auto measure = make_tone_response(tones, realisation, realisations);
        for (std::size_t i = 0; i < realisations; ++i) {
            const std::vector<double> x = tones_of_phases(tones, realisation, random);
            measure->add(x, error_of(x, rest, normal));
        }
        measure->finish();
        const ResponseSums& sums = measure->sums();
        REQUIRE(sums.averages == static_cast<std::int64_t>(realisations));
        for (std::size_t i = 0; i < tones.size(); ++i) count(held[i], sums, i);
    }
    // What the filter's first two samples lack stands where a Hann window over 128 is below 1e-3.
    for (const Held& of_point : held) check(of_point, boards);
}

TEST_CASE("response estimate: periods of one stimulus, and one realisation, have no spread to go by", "[measure]") {
    Random random(22);
    Gaussian normal(122);
    const std::vector<double> x = tones_of_phases({0.05}, 1024, random);
    const auto measure = make_tone_response({0.05}, 1024);
    measure->add(x, error_of(x, rounded, normal));
    measure->finish();
    const ResponseSums& sums = measure->sums();
    const ResponseEstimate estimate = estimate_of(sums, 0);
    CHECK(std::isfinite(std::abs(estimate.value)));
    CHECK(estimate.degrees == 0.0);
    const Interval gain = gain_interval(1.0, estimate, 0.95);
    CHECK(gain.low == 0.0);
    CHECK(std::isinf(gain.high));
    CHECK(phase_interval(1.0, estimate, 0.95).high == Approx(pi));
    CHECK(std::isinf(gain_surely_below(1.0, estimate, 0.05)));
    CHECK(gain_surely_above(1.0, estimate, 0.05) == 0.0);
}

TEST_CASE("response estimate: an offset of the board stands at 0 alone, and widens the interval there", "[measure]") {
    const int boards = test::rounds_of(2000);
    Random random(25);
    Gaussian normal(125);
    int held = 0;
    for (int board = 0; board < boards; ++board) {
        std::vector<double> x(1024), error(1024);
        for (std::size_t n = 0; n < x.size(); ++n) {
            x[n] = 0.9 * random.ratio();
            error[n] = 0.01 + 0.001 * normal.next();
        }
        const auto measure = make_welch_response(64);
        measure->add(x, error);
        measure->finish();
        const ResponseEstimate estimate = surest_estimate(measure->sums(), 0);
        const Interval gain = gain_interval(1.0, estimate, 0.95);
        held += gain.low <= 1.0 && 1.0 <= gain.high;
    }
    CHECK(holds_95_percent(held, boards));
}

TEST_CASE("response estimate: where the stimulus has no power, nothing is said", "[measure]") {
    const std::vector<double> silence(1024, 0.0), error(1024, 0.1);
    const auto measure = make_welch_response(64);
    measure->add(silence, error);
    measure->finish();
    const ResponseEstimate estimate = estimate_of(measure->sums(), 3);
    CHECK(std::isnan(estimate.value.real()));
    CHECK(estimate.degrees == 0.0);
}

TEST_CASE("response estimate: what the window smooths is taken off again", "[measure]") {
    // A difference of a delayed tap, 0.1 z^-6 under a window of 64: the window shortens it by
    // 1 - sum w[n] w[n + 6] / sum w^2 = 0.0551 (Hann, COMPUTED below). Taking off half its kernel's variance times the
    // second difference leaves the fourth order: (2 pi 6 / 64)^4 (1/24 (m4) ...), about 0.1 times as much.
    const std::size_t length = 400000;
    Random random(23);
    std::vector<double> x(length), error(length);
    for (std::size_t n = 0; n < length; ++n) {
        x[n] = 0.9 * random.ratio();
        if (n >= 6) error[n] = 0.1 * x[n - 6];
    }
    const auto measure = make_welch_response(64);
    measure->add(x, error);
    measure->finish();
    const ResponseSums& sums = measure->sums();
    double plain_bias = 0.0, bias = 0.0;
    for (std::size_t k = 2; k <= 30; ++k) {
        const Complex truth = std::polar(0.1, -2.0 * pi * 6.0 * sums.cycles_per_sample[k]);
        const ResponseTerm alone{k, 1.0};
        plain_bias += (estimate_of(sums, std::span(&alone, 1)).value / truth).real() - 1.0;
        bias += (estimate_of(sums, k).value / truth).real() - 1.0;
    }
    double overlap = 0.0, energy = 0.0;
    for (int n = 0; n < 64; ++n) {
        const auto window = [](int i) { return i < 64 ? std::pow(std::sin(pi * i / 64.0), 2) : 0.0; };
        overlap += window(n) * window(n + 6);
        energy += window(n) * window(n);
    }
    const double expected = overlap / energy - 1.0;
    // 29 bins, each known to sqrt(smoothed rest, 0.3 / 12500 segments) = 0.5 %: their mean to 0.1 %.
    CHECK(plain_bias / 29.0 == Approx(expected).margin(0.005));
    CHECK(std::fabs(bias / 29.0) < std::fabs(expected) / 8.0 + 0.003);
}

TEST_CASE("response estimate: of a stimulus that passes once, the spread is between neighbours", "[measure]") {
    const int boards = test::rounds_of(2000);
    Gaussian normal(124);
    int held = 0, counted = 0;
    const std::size_t length = 8192;
    std::vector<double> x(length);
    for (std::size_t n = 0; n < length; ++n) {
        const double t = static_cast<double>(n);
        x[n] = 0.9 * std::sin(2.0 * pi * std::fmod(0.01 * t + 0.5 * 0.48 * t * t / static_cast<double>(length), 1.0));
    }
    for (int board = 0; board < boards; ++board) {
        const auto measure = make_welch_response(256);
        measure->add(x, error_of(x, added_noise, normal));
        measure->finish();
        const ResponseSums& sums = measure->sums();
        // Two or three batches of segments see a frequency: by themselves they know little.
        CHECK(estimate_of(sums, 60).degrees < 8.0);
        for (const std::size_t point : {40u, 64u, 90u}) {
            const double f = sums.cycles_per_sample[point];
            const ResponseEstimate estimate = estimate_from_neighbours(sums, point);
            CHECK(estimate.degrees == 22.0);
            const Interval gain = gain_interval(response_of(design_taps, f), estimate, 0.95);
            const double truth = std::abs(response_of(board_taps, f));
            held += gain.low <= truth && truth <= gain.high;
            ++counted;
        }
    }
    // A difference that bends within the neighbours widens the interval, and never narrows it.
    CHECK(held / static_cast<double>(counted) > 0.95 - band_of_95_percent(counted));
}
