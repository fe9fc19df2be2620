#include "oracle/filters/closed_forms.hpp"

#include <algorithm>

#include "tests/oracle/support.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr double pi = 3.14159265358979323846;

double delay(const FilterChain& chain, double f) { return group_delay_samples(chain, f); }
FilterChain one(const BiquadSection& section) { return {stage(BiquadCascade{{section}})}; }
double phase(const FilterChain& chain, double f) { return unwrapped_phase(chain, std::vector<double>{f}).front(); }

}  // namespace

TEST_CASE("group delay: moving averages and symmetric FIR delay by half their length, at their zeros too",
          "[filters][closed-forms]") {
    for (const double f : {0.0, 0.1, 0.25, 0.3, 0.5}) {
        CHECK(delay({stage(MovingAverage{4})}, f) == 1.5);
        CHECK(delay({stage(Fir{{1.0, 0.0, -3.0, 0.0, 1.0}})}, f) == 2.0);
        CHECK(delay({stage(Fir{{1.0, 0.5, -0.5, -1.0}})}, f) == 1.5);
        CHECK(delay({stage(Fir{{0.0, 0.0, 0.0, 1.0}})}, f) == 3.0);
    }
}

TEST_CASE("group delay: the published delays of moving averages (COMPUTED)", "[filters][closed-forms][published]") {
    const CsvTable table("moving-average-summary.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const int points = static_cast<int>(table.number(row, "M"));
        CHECK(delay({stage(MovingAverage{points})}, 0.123) == table.number(row, "group delay"));
    }
}

TEST_CASE("group delay: a one-pole has (1 - k) / k samples at zero frequency, to the last digits at any k",
          "[filters][closed-forms]") {
    for (const double k : {0.5, 0x1p-6, 0x1p-29}) {
        CHECK_THAT(delay(one({k, 0.0, 0.0, k - 1.0, 0.0}), 0.0), Catch::WithinRel((1.0 - k) / k, 4e-16));
    }
    // r cos w of 1 / (1 - r z^-1) at half the rate: -r / (1 + r).
    CHECK_THAT(delay(one({1.0, 0.0, 0.0, -0.75, 0.0}), 0.5), Catch::WithinRel(-0.75 / 1.75, 4e-16));
}

TEST_CASE("group delay: zeros on the circle count half a sample each, at the zero and beside it",
          "[filters][closed-forms]") {
    // A notch: the numerator delays by 1 everywhere.
    const BiquadSection notch{1.0, -2.0 * std::cos(0.4), 1.0, -1.9 * std::cos(0.4), 0.9};
    const double without = delay(one({1.0, 0.0, 0.0, notch.a1, notch.a2}), 0.4 / (2.0 * pi));
    CHECK_THAT(delay(one(notch), 0.4 / (2.0 * pi)), Catch::WithinRel(1.0 + without, 1e-15));
    // A DC blocker: half a sample at zero frequency, where it passes nothing, and just above.
    const BiquadSection blocker{1.0, -1.0, 0.0, -0.75, 0.0};
    for (const double f : {0.0, 1e-12, 1e-9}) CHECK_THAT(delay(one(blocker), f), Catch::WithinAbs(0.5 + 3.0, 1e-9));
    // A zero at z = -1 with another one inside, (1 + z^-1)(1 - 0.25 z^-1), at half the rate: 1/2 - 0.25 / -1.25.
    const BiquadSection two{1.0, 0.75, -0.25, 0.0, 0.0};
    CHECK_THAT(delay(one(two), 0.5), Catch::WithinAbs(0.5 + 0.25 / 1.25, 1e-15));
    CHECK_THAT(delay(one(two), 0.5 - 1e-9), Catch::WithinAbs(0.5 + 0.25 / 1.25, 1e-8));
    // A comb with its zeros on the circle, at a zero.
    CHECK(delay({stage(Comb{4, 1.0, 1.0, 0.0})}, 0.125) == 2.0);
    CHECK(delay({stage(Comb{4, 1.0, -1.0, 0.0})}, 0.25) == 2.0);
    // No symmetry, and nothing comes out: there is no delay to tell.
    CHECK(std::isnan(delay({stage(Fir{{1.0, -3.0, 2.0}})}, 0.0)));
}

TEST_CASE("group delay: an all-pass of second order has its textbook delay", "[filters][closed-forms]") {
    // H = (r^2 - 2 r c z^-1 + z^-2) / (1 - 2 r c z^-1 + r^2 z^-2): (1 - r^2)(1 / |e - p|^2 + 1 / |e - p*|^2).
    const double r = 0.99, angle = 0.3, c = std::cos(angle);
    const BiquadSection section{r * r, -2.0 * r * c, 1.0, -2.0 * r * c, r * r};
    for (const double w : {0.0, 0.1, 0.29, 0.3, 0.5, 2.0, 3.1}) {
        const double near = 1.0 - 2.0 * r * std::cos(w - angle) + r * r,
                     far = 1.0 - 2.0 * r * std::cos(w + angle) + r * r;
        CHECK_THAT(delay(one(section), w / (2.0 * pi)),
                   Catch::WithinRel((1.0 - r * r) * (1.0 / near + 1.0 / far), 1e-11));
    }
}

TEST_CASE("group delay: stages add up", "[filters][closed-forms]") {
    const FilterStage average = stage(MovingAverage{5}), comb = stage(Comb{3, 1.0, 0.5, -0.2});
    CHECK(delay({average, comb}, 0.2) == 2.0 + delay({comb}, 0.2));
    CHECK(delay({}, 0.2) == 0.0);
}

TEST_CASE("group delay and phase: a recursion by b and a has those of the same section", "[filters][closed-forms]") {
    const FilterChain section = one({0.3, -0.2, 0.5, -1.1, 0.7});
    const FilterChain recursion{stage(Recursion{{0.3, -0.2, 0.5}, {1.0, -1.1, 0.7}})};
    std::vector<double> grid;
    for (int i = 0; i <= 50; ++i) grid.push_back(0.01 * i);
    const auto phases = unwrapped_phase(section, grid), same = unwrapped_phase(recursion, grid);
    for (std::size_t i = 0; i < grid.size(); ++i) {
        CHECK_THAT(delay(recursion, grid[i]), Catch::WithinAbs(delay(section, grid[i]), 1e-12));
        CHECK_THAT(same[i], Catch::WithinAbs(phases[i], 1e-12));
    }
    CHECK(std::isnan(delay({stage(Median{3})}, 0.1)));
}

TEST_CASE("phase: wrapped it is the response's, unwrapped it runs on", "[filters][closed-forms]") {
    const FilterChain chain{stage(MovingAverage{16}), stage(BiquadCascade{{{1.0, 0.0, 0.0, -1.2, 0.9}}})};
    for (const double f : {0.01, 0.1, 0.22, 0.4}) {
        CHECK(phase_at(chain, f) == std::arg(response_at(chain, f)));
        CHECK_THAT(std::remainder(phase(chain, f) - phase_at(chain, f), 2.0 * pi), Catch::WithinAbs(0.0, 1e-13));
    }
    // 40 sections, each turning by half a turn and more: far beyond any wrap, from a single frequency.
    const FilterChain long_chain{stage(BiquadCascade{std::vector<BiquadSection>(40, {1.0, 0.0, 0.0, -1.2, 0.9})})};
    CHECK_THAT(phase(long_chain, 0.3), Catch::WithinRel(40.0 * phase({long_chain[0]}, 0.3) / 40.0, 1e-15));
    CHECK(phase(long_chain, 0.3) < -40.0);
}

TEST_CASE("phase: a zero on the circle turns it by half a turn", "[filters][closed-forms]") {
    // Moving average of 4: -3 pi f, and half a turn more behind 1/4.
    const FilterChain average{stage(MovingAverage{4})};
    CHECK_THAT(phase(average, 0.2), Catch::WithinAbs(-0.6 * pi, 1e-15));
    CHECK_THAT(phase(average, 0.3), Catch::WithinAbs(-0.9 * pi + pi, 1e-15));
    // The same as a symmetric FIR, along a grid that sees the zero.
    const std::vector<double> grid{0.0, 0.1, 0.2, 0.3, 0.4};
    const auto fir = unwrapped_phase({stage(Fir{{0.25, 0.25, 0.25, 0.25}})}, grid);
    for (std::size_t i = 0; i < grid.size(); ++i) CHECK_THAT(fir[i], Catch::WithinAbs(phase(average, grid[i]), 1e-14));
    // The same as sections: (1 + z^-1)(1 + z^-2) / 4.
    const FilterChain sections{stage(BiquadCascade{{{0.5, 0.5, 0.0, 0.0, 0.0}, {0.5, 0.0, 0.5, 0.0, 0.0}}})};
    for (const double f : grid) CHECK_THAT(phase(sections, f), Catch::WithinAbs(phase(average, f), 1e-14));
    // A notch, just below and above.
    const BiquadSection notch{1.0, 0.0, 1.0, 0.0, 0.81};
    CHECK_THAT(phase(one(notch), 0.2501) - phase(one(notch), 0.2499), Catch::WithinAbs(pi, 0.02));
    // 1 - z^-1: a quarter of a turn at zero frequency, as just above it; (1 - z^-1)^2 half a turn.
    CHECK(phase(one({1.0, -1.0, 0.0, 0.0, 0.0}), 0.0) == 0.5 * pi);
    CHECK_THAT(phase(one({1.0, -1.0, 0.0, 0.0, 0.0}), 1e-6), Catch::WithinAbs(0.5 * pi, 1e-5));
    CHECK(phase(one({1.0, -2.0, 1.0, 0.0, 0.0}), 0.0) == pi);
    CHECK_THAT(phase({stage(Comb{1, 1.0, -1.0, 0.0})}, 0.2),
               Catch::WithinAbs(phase(one({1.0, -1.0, 0.0, 0.0, 0.0}), 0.2), 1e-14));
}

TEST_CASE("phase: an FIR whose zeros nearly touch the circle is followed through them", "[filters][closed-forms]") {
    // Zeros of radius 1 - 1e-7 inside: up by half a turn within 1e-7; outside: down by it. 0.01 is the grid.
    for (const double side : {-1.0, 1.0}) {
        const double radius = 1.0 + side * 1e-7, turn = 2.0 * pi * 0.1003;
        const FilterChain chain{stage(Fir{{1.0, -2.0 * radius * std::cos(turn), radius * radius, 0.0}})};
        std::vector<double> grid;
        for (int i = 0; i <= 50; ++i) grid.push_back(0.01 * i);
        const auto along = unwrapped_phase(chain, grid);
        const FilterChain section = one({1.0, -2.0 * radius * std::cos(turn), radius * radius, 0.0, 0.0});
        for (std::size_t i = 0; i < grid.size(); ++i) {
            CHECK_THAT(along[i] - along[0], Catch::WithinAbs(phase(section, grid[i]) - phase(section, 0.0), 1e-9));
        }
        CHECK_THAT(along[20], Catch::WithinAbs(side < 0.0 ? pi - 0.4 * pi : -pi - 0.4 * pi, 1e-4));
    }
}

TEST_CASE("step response: it sums up the impulse response and settles at the DC gain", "[filters][closed-forms]") {
    const FilterChain chain{stage(BiquadCascade{{{0.2, 0.1, 0.0, -1.1, 0.5}}}), stage(MovingAverage{3})};
    const auto step = step_response(chain, 200), h = impulse_response(chain, 200);
    double sum = 0.0;
    for (std::size_t n = 0; n < step.size(); ++n) {
        sum += h[n];
        CHECK_THAT(step[n], Catch::WithinAbs(sum, 1e-14));
    }
    CHECK_THAT(step.back(), Catch::WithinAbs(0.3 / 0.4, 1e-14));
    CHECK(step_response(chain, 0).empty());
}

TEST_CASE("poles and zeros: pairs, real ones, double ones and missing ones", "[filters][closed-forms]") {
    using Roots = std::vector<std::complex<double>>;
    const auto pair = poles_of({1.0, 0.0, 0.0, -1.2, 0.72});
    REQUIRE(pair.size() == 2);
    CHECK(std::abs(pair[0] - std::complex<double>(0.6, 0.6)) < 1e-15);
    CHECK(pair[1] == std::conj(pair[0]));
    CHECK(poles_of({1.0, 0.0, 0.0, -0.75, 0.125}) == Roots{0.5, 0.25});
    CHECK(poles_of({1.0, 0.0, 0.0, -0.5, 0.0}) == Roots{0.5});
    CHECK(poles_of({}).empty());
    CHECK(zeros_of({2.0, -4.0, 2.0, 0.0, 0.0}) == Roots{1.0, 1.0});
    CHECK(zeros_of({0.0, 2.0, 1.0, 0.0, 0.0}) == Roots{-0.5});
    CHECK(zeros_of({0.0, 0.0, 1.0, 0.0, 0.0}).empty());
    const auto notch = zeros_of({-2.0, 0.0, -2.0, 0.0, 0.0});
    REQUIRE(notch.size() == 2);
    CHECK((notch[0] == std::complex<double>(0.0, 1.0) && notch[1] == std::complex<double>(0.0, -1.0)));
    // A large and a small one: the small one loses no digits.
    const auto apart = zeros_of({1.0, -1e8, 1.0, 0.0, 0.0});
    REQUIRE(apart.size() == 2);
    CHECK_THAT(apart[1].real(), Catch::WithinRel(1e-8, 1e-15));
}
