#include "oracle/measure/sine_fit.hpp"

#include <limits>
#include <numbers>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/support.hpp"
#include "tests/published/csv_table.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr double pi = std::numbers::pi;

std::vector<double> codes_of(const std::string& name) {
    const CsvTable table(name);
    std::vector<double> codes;
    for (std::size_t row = 0; row < table.rows(); ++row) codes.push_back(table.number(row, "y [codes]"));
    return codes;
}

// The records are integers of at most 2^11, the fits well conditioned: amplitudes to a few 1e-13, and the rms, a
// sum of 64 squares of differences, to 1e-12. The table's own figures agree with a second program to 1e-12.
void check_row(const SineFit& fit, std::size_t row, double f_tolerance) {
    const CsvTable table("sinefit-expected.csv");
    const double a = fit.amplitude.value * std::cos(fit.phase_radians.value),
                 b = -fit.amplitude.value * std::sin(fit.phase_radians.value);
    // A frequency that is off by df turns the phase by 2 pi 32 df, times an amplitude of 1500.
    const double slack = 1e-9 + 2.0 * pi * 64.0 * 1500.0 * f_tolerance;
    CHECK(fit.cycles_per_sample.value == Approx(table.number(row, "f [")).margin(f_tolerance).epsilon(0));
    CHECK(a == Approx(table.number(row, "A:")).margin(slack).epsilon(0));
    CHECK(b == Approx(table.number(row, "B:")).margin(slack).epsilon(0));
    CHECK(fit.offset.value == Approx(table.number(row, "C:")).margin(slack).epsilon(0));
    CHECK(fit.amplitude.value == Approx(table.number(row, "amplitude")).margin(slack).epsilon(0));
    CHECK(fit.phase_radians.value == Approx(table.number(row, "phase")).margin(slack / 1000.0).epsilon(0));
    CHECK(fit.rms_residual == Approx(table.number(row, "rms")).margin(slack).epsilon(0));
}

std::vector<double> sine(std::size_t samples, double f, double amplitude, double phase, double offset) {
    std::vector<double> record(samples);
    for (std::size_t n = 0; n < samples; ++n) {
        const long double turns = static_cast<long double>(f) * static_cast<long double>(n);
        const auto angle = static_cast<double>(turns - std::floor(turns)) * 2.0 * pi;
        record[n] = offset + amplitude * std::cos(angle + phase);
    }
    return record;
}

}  // namespace

// COMPUTED (NumPy), OCTAVE: check-values 7.1.
TEST_CASE("sine fit: the examples with known frequency give the published figures", "[oracle][published]") {
    const auto a = fit_sine_at(0.109375, codes_of("sinefit-example-a.csv"));
    REQUIRE(a.fit);
    check_row(*a.fit, 0, 0.0);
    const auto b = codes_of("sinefit-example-b.csv");
    REQUIRE(fit_sine_at(0.0937, b).fit);
    check_row(*fit_sine_at(0.0937, b).fit, 1, 0.0);
    REQUIRE(fit_sine_at(0.094, b).fit);
    check_row(*fit_sine_at(0.094, b).fit, 2, 0.0);
}

// COMPUTED (NumPy), OCTAVE 1e-12; scipy.optimize.least_squares 1e-9.
TEST_CASE("sine fit: four parameters find the published frequency from a start that is off", "[oracle][published]") {
    const auto b = fit_sine_near(0.094, codes_of("sinefit-example-b.csv"));
    REQUIRE(b.fit);
    CHECK(b.fit->parameters == 4);
    CHECK(b.fit->steps < 10);
    check_row(*b.fit, 3, 1e-14);
}

TEST_CASE("sine fit: a long record keeps phase and frequency", "[oracle]") {
    // Doubles near 1 carry 2^-53; the table of turns and the sums stay within a few of these.
    for (const std::size_t length : {100'001u, 262'144u}) {
        const double f = 0.0123456789;
        const auto record = sine(length, f, 0.75, 2.5, 0.125);
        const auto known = fit_sine_at(f, record), found = fit_sine_near(f + 0.3 / static_cast<double>(length), record);
        REQUIRE(known.fit);
        REQUIRE(found.fit);
        CHECK(known.fit->amplitude.value == Approx(0.75).margin(1e-14).epsilon(0));
        CHECK(known.fit->phase_radians.value == Approx(2.5).margin(1e-12).epsilon(0));
        CHECK(known.fit->offset.value == Approx(0.125).margin(1e-14).epsilon(0));
        CHECK(known.fit->rms_residual < 1e-14);
        CHECK(found.fit->cycles_per_sample.value == Approx(f).margin(1e-15).epsilon(0));
        std::vector<double> rest(length);
        subtract_sine(*known.fit, record, rest);
        double largest = 0.0;
        for (const double r : rest) largest = std::max(largest, std::abs(r));
        CHECK(largest < 1e-13);
    }
}

TEST_CASE("sine fit: uncertainties are the Cramer-Rao bound over many cycles", "[oracle]") {
    constexpr std::size_t length = 4096;
    auto record = sine(length, 0.1234, 0.5, 1.0, 0.1);
    Gaussian noise(5);
    for (double& sample : record) sample += 1e-3 * noise.next();
    const auto fit = fit_sine_near(0.1234, record).fit;
    REQUIRE(fit);
    // The closed forms leave out terms of 1 / cycles, here 1/500, and N - 4 for N.
    const double n = length, s = fit->rms_residual;
    CHECK(fit->amplitude.standard_uncertainty == Approx(s * std::sqrt(2.0 / n)).epsilon(5e-3));
    CHECK(fit->offset.standard_uncertainty == Approx(s / std::sqrt(n)).epsilon(5e-3));
    CHECK(fit->cycles_per_sample.standard_uncertainty ==
          Approx(std::sqrt(6.0 / (n * (n * n - 1.0))) * s / (pi * 0.5)).epsilon(5e-3));
    // Phase at the first sample: var = 8 s^2 / (A^2 N), four times that at the middle (Rife and Boorstyn 1974).
    CHECK(fit->phase_radians.standard_uncertainty == Approx(std::sqrt(8.0 / n) * s / 0.5).epsilon(5e-3));
}

TEST_CASE("sine fit: the residual's variance is divided by samples less parameters", "[oracle]") {
    auto record = sine(16, 0.125, 1.0, 0.3, 0.0);
    Gaussian noise(8);
    for (double& sample : record) sample += 0.01 * noise.next();
    const auto fit = fit_sine_at(0.125, record).fit;
    REQUIRE(fit);
    // Coherent: the columns are orthogonal, of lengths sqrt(N / 2) and sqrt(N).
    const double s = fit->rms_residual * std::sqrt(16.0 / 13.0);
    CHECK(fit->amplitude.standard_uncertainty == Approx(s * std::sqrt(2.0 / 16.0)).epsilon(1e-12));
    CHECK(fit->offset.standard_uncertainty == Approx(s / 4.0).epsilon(1e-12));
}

TEST_CASE("sine fit: 95 % intervals hold the true values", "[oracle]") {
    const int rounds = test::rounds_of(2000);
    int amplitude = 0, phase = 0, offset = 0, frequency = 0;
    Gaussian noise(77);
    for (int round = 0; round < rounds; ++round) {
        auto record = sine(200, 0.0713, 1.0, 0.4, -0.2);
        for (double& sample : record) sample += 0.05 * noise.next();
        const auto fit = fit_sine_near(0.072, record).fit;
        REQUIRE(fit);
        amplitude += holds(fit->amplitude.value, fit->amplitude.standard_uncertainty, 1.0);
        phase += holds(fit->phase_radians.value, fit->phase_radians.standard_uncertainty, 0.4);
        offset += holds(fit->offset.value, fit->offset.standard_uncertainty, -0.2);
        frequency += holds(fit->cycles_per_sample.value, fit->cycles_per_sample.standard_uncertainty, 0.0713);
    }
    for (const int held : {amplitude, phase, offset, frequency}) CHECK(holds_95_percent(held, rounds));
}

TEST_CASE("sine fit: what cannot be fitted has a reason", "[oracle]") {
    auto record = sine(64, 0.1, 1.0, 0.0, 0.0);
    CHECK(fit_sine_at(0.1, std::span(record).first(sine_fit_least_samples - 1)).fault == ToneFault::too_short);
    CHECK(fit_sine_at(0.1, std::span(record).first(sine_fit_least_samples)).fit);
    for (const double f : {0.9 / 64, 0.5 - 0.9 / 64, 0.0, 0.5, 0.7, -0.1, std::nan("")}) {
        CHECK(fit_sine_at(f, record).fault == ToneFault::near_an_end);
        CHECK(fit_sine_near(f, record).fault == ToneFault::near_an_end);
    }
    CHECK(fit_sine_at(1.0 / 64, record).fit);
    CHECK(fit_sine_near(0.3, record).fault == ToneFault::ran_away);
    CHECK(fit_sine_near(0.3, std::vector<double>(64, 0.0)).fault == ToneFault::no_tone);
    CHECK(fit_sine_at(0.3, std::vector<double>(64, 0.0)).fit->amplitude.value == 0.0);
    for (const double bad : {std::nan(""), std::numeric_limits<double>::infinity()}) {
        record[63] = bad;
        CHECK(fit_sine_at(0.1, record).fault == ToneFault::not_finite);
    }
    CHECK(!reason_of(ToneFault::ran_away).empty());
}
