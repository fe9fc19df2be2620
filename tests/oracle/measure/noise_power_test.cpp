#include "oracle/measure/noise_power.hpp"

#include <limits>

#include "oracle/measure/quantile.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/support.hpp"
#include "tests/published/csv_table.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Records {
    std::vector<double> x, y;
};

// Impulse responses; of the one-pole down to 1e-5, which leaves 1e-10 / alpha of its sum of squares out.
std::vector<double> moving_average(int points) {
    return std::vector<double>(static_cast<std::size_t>(points), 1.0 / points);
}

std::vector<double> one_pole(double alpha) {
    std::vector<double> h;
    for (double tap = alpha; tap > 1e-5; tap *= 1.0 - alpha) h.push_back(tap);
    return h;
}

std::vector<double> filtered(const std::vector<double>& h, const std::vector<double>& x) {
    std::vector<double> y(x.size() - h.size());
    for (std::size_t n = 0; n < y.size(); ++n) {
        for (std::size_t k = 0; k < h.size(); ++k) y[n] += h[k] * x[n + h.size() - k];
    }
    return y;
}

// Settled: the filter has seen noise for as long as it remembers.
Records run(const std::vector<double>& h, std::size_t length, Gaussian& noise) {
    std::vector<double> x(length + h.size());
    for (double& sample : x) sample = noise.next();
    Records records{{}, filtered(h, x)};
    records.x.assign(x.begin() + static_cast<std::ptrdiff_t>(h.size()), x.end());
    return records;
}

double sum_of_squares(const std::vector<double>& h) {
    double sum = 0.0;
    for (const double tap : h) sum += tap * tap;
    return sum;
}

// 2 (sum r^2 - ratio^2), the closed form of the header.
double closed_variance(const std::vector<double>& h) {
    double sum = 0.0;
    for (std::size_t k = 0; k < h.size(); ++k) {
        double r = 0.0;
        for (std::size_t n = 0; n + k < h.size(); ++n) r += h[n] * h[n + k];
        sum += (k == 0 ? 1.0 : 2.0) * r * r;
    }
    return 2.0 * (sum - sum_of_squares(h) * sum_of_squares(h));
}

NoiseRatioFigures ratio_of(const Records& records) {
    NoiseRatioMeasure measure;
    measure.add(records.x, records.y);
    const auto answer = measure.value();
    REQUIRE(answer.figures);
    CHECK(answer.fault == NoiseFault::none);
    return *answer.figures;
}

ExcessNoiseFigures excess_of(std::span<const double> errors) {
    ExcessNoiseMeasure measure;
    measure.add(std::vector<double>(errors.size(), 0.0), errors);
    const auto answer = measure.value();
    REQUIRE(answer.figures);
    CHECK(answer.fault == NoiseFault::none);
    return *answer.figures;
}

bool is_held(const Figure& figure, int degrees, double truth) {
    return std::fabs(figure.value - truth) <= student_quantile_above(0.025, degrees) * figure.standard_uncertainty;
}

}  // namespace

// COMPUTED: check-values 1.
TEST_CASE("noise ratio: a moving average lets 1 / M through", "[measure][published]") {
    const CsvTable table("moving-average-summary.csv");
    int checked = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const int points = static_cast<int>(table.number(row, "M "));
        if (points != 4 && points != 10 && points != 16) continue;
        INFO("points " << points);
        Gaussian noise(900 + static_cast<std::uint64_t>(points));
        const auto h = moving_average(points);
        const auto f = ratio_of(run(h, 100000, noise));
        const double u = std::sqrt(closed_variance(h) / 1e5);
        // 4 standard uncertainties of the closed form, which is 0.5 % of the ratio at 4 points, 0.9 % at 16; and 4 of
        // an uncertainty that is known to 1 / sqrt(2 x 32).
        CHECK(f.ratio.value == Approx(table.number(row, "noise power gain [1]")).margin(4.0 * u).epsilon(0));
        CHECK(f.ratio.standard_uncertainty == Approx(u).epsilon(0.5));
        REQUIRE(f.ratio_db);
        CHECK(f.ratio_db->value == Approx(10.0 * std::log10(f.ratio.value)).epsilon(1e-14));
        CHECK(f.ratio_db->standard_uncertainty ==
              Approx(4.342944819032518 * f.ratio.standard_uncertainty / f.ratio.value).epsilon(1e-14));
        CHECK(f.stimulus_power == Approx(1.0).margin(4.0 * std::sqrt(2.0 / 1e5)).epsilon(0));
        CHECK((f.samples == 100000 && f.degrees == 32));
        ++checked;
    }
    CHECK(checked == 3);
}

TEST_CASE("noise ratio: what the tests compare with, by hand", "[measure]") {
    // sum ((4 - |k|) / 16)^2 = 44 / 256
    CHECK(sum_of_squares(one_pole(0.0625)) == Approx(1.0 / 31.0).epsilon(1e-7));  // alpha / (2 - alpha)
    CHECK(closed_variance(moving_average(4)) == Approx(2.0 * (44.0 / 256.0 - 1.0 / 16.0)).epsilon(1e-14));
}

TEST_CASE("noise ratio: intervals hold the truth as often as promised, and are as wide as must be", "[measure]") {
    const auto h = GENERATE(moving_average(4), moving_average(16), one_pole(0.0625), std::vector<double>{1.0, -0.5});
    const std::size_t length = 200 * std::min<std::size_t>(h.size(), 32);
    const int rounds = test::rounds_of(2000);
    const double truth = sum_of_squares(h);
    INFO(h.size() << " taps");
    Gaussian noise(910);
    int held = 0;
    double said = 0.0, was = 0.0;
    for (int round = 0; round < rounds; ++round) {
        const auto f = ratio_of(run(h, length, noise));
        held += is_held(*f.ratio_db, f.degrees, 10.0 * std::log10(truth));
        said += std::pow(f.ratio.standard_uncertainty, 2) / rounds;
        was += std::pow(f.ratio.value - truth, 2) / rounds;
    }
    CHECK(holds_95_percent(held, rounds));
    // 32 degrees of freedom a round, 1 for the true square: 4 deviations; and what first order leaves out, some three
    // terms of the filter's memory over the length, 1 % each.
    const double closed = closed_variance(h) / static_cast<double>(length);
    CHECK(said == Approx(closed).epsilon(4.0 * std::sqrt(2.0 / 32.0 / rounds) + 0.03));
    CHECK(was == Approx(closed).epsilon(4.0 * std::sqrt(2.0 / rounds) + 0.03));
}

TEST_CASE("noise ratio: the stimulus's distribution does not matter", "[measure]") {
    // Uniform noise has 60 % less spread of its own power than normal noise; of the ratio none of it is left.
    const auto h = moving_average(4);
    const int rounds = test::rounds_of(2000);
    double said = 0.0;
    int held = 0;
    for (int round = 0; round < rounds; ++round) {
        const auto x = noise(1004, 5000 + static_cast<std::uint64_t>(round));
        const auto f = ratio_of({{x.begin() + 4, x.end()}, filtered(h, x)});
        said += std::pow(f.ratio.standard_uncertainty, 2) / rounds;
        held += is_held(f.ratio, f.degrees, 0.25);
    }
    CHECK(said == Approx(closed_variance(h) / 1000.0).epsilon(4.0 * std::sqrt(2.0 / 32.0 / rounds) + 0.03));
    CHECK(holds_95_percent(held, rounds));
}

TEST_CASE("noise ratio: a plain gain is known without doubt, a silent response is 0", "[measure]") {
    Records records{noise(5000, 61), {}};
    for (const double sample : records.x) records.y.push_back(-0.5 * sample);
    const auto f = ratio_of(records);
    CHECK((f.ratio.value == 0.25 && f.ratio.standard_uncertainty == 0.0));
    records.y.assign(5000, 0.75);
    const auto silent = ratio_of(records);
    CHECK((silent.ratio.value == 0.0 && silent.ratio.standard_uncertainty == 0.0 && !silent.ratio_db));
    CHECK(silent.response_mean == 0.75);
}

TEST_CASE("noise ratio: means are removed, also those far above the noise", "[measure]") {
    Gaussian noise(62);
    auto records = run(moving_average(4), 20000, noise);
    const auto plain = ratio_of(records);
    for (double& sample : records.x) sample += 1e6;
    for (double& sample : records.y) sample -= 3e5;
    const auto moved = ratio_of(records);
    // Samples near 1e6 are rounded by 2^-34, at random: 1e-10 of each, less of the sums.
    CHECK(moved.ratio.value == Approx(plain.ratio.value).epsilon(1e-9));
    CHECK(moved.ratio.standard_uncertainty == Approx(plain.ratio.standard_uncertainty).epsilon(1e-8));
    CHECK(moved.stimulus_mean == Approx(plain.stimulus_mean + 1e6).margin(1e-9).epsilon(0));
    CHECK(moved.response_mean == Approx(plain.response_mean - 3e5).margin(1e-9).epsilon(0));
}

TEST_CASE("excess noise: rounding errors have 1 / 12, whatever the bias, as surely as said", "[measure]") {
    // Uniform e: mean e^4 - (mean e^2)^2 = 1 / 80 - 1 / 144 = 1 / 180.
    const int rounds = test::rounds_of(2000);
    Random random(63);
    int power = 0, bias = 0;
    double said = 0.0, said_of_bias = 0.0;
    for (int round = 0; round < rounds; ++round) {
        std::vector<double> errors(2000);
        for (double& e : errors) e = -3.0 + 0.5 * random.ratio();
        const auto f = excess_of(errors);
        power += is_held(f.power, f.degrees, 1.0 / 12.0);
        bias += is_held(f.bias, f.degrees, -3.0);
        said += std::pow(f.power.standard_uncertainty, 2) / rounds;
        said_of_bias += std::pow(f.bias.standard_uncertainty, 2) / rounds;
    }
    CHECK(holds_95_percent(power, rounds));
    CHECK(holds_95_percent(bias, rounds));
    const double spread = 4.0 * std::sqrt(2.0 / 32.0 / rounds);
    CHECK(said == Approx(1.0 / 180.0 / 2000.0).epsilon(spread));
    CHECK(said_of_bias == Approx(1.0 / 12.0 / 2000.0).epsilon(spread));
}

TEST_CASE("excess noise: errors that a filter has correlated are held as often as promised", "[measure]") {
    const auto h = one_pole(0.125);
    const int rounds = test::rounds_of(2000);
    Gaussian noise(64);
    int power = 0, bias = 0;
    for (int round = 0; round < rounds; ++round) {
        const auto f = excess_of(run(h, 3200, noise).y);
        power += is_held(f.power, f.degrees, 0.125 / 1.875);  // alpha / (2 - alpha)
        bias += is_held(f.bias, f.degrees, 0.0);
    }
    CHECK(holds_95_percent(power, rounds));
    CHECK(holds_95_percent(bias, rounds));
}

TEST_CASE("excess noise: an error that stands still has none", "[measure]") {
    const auto f = excess_of(std::vector<double>(1000, -0x1p-16));
    CHECK((f.power.value == 0.0 && f.power.standard_uncertainty == 0.0));
    CHECK((f.bias.value == -0x1p-16 && f.bias.standard_uncertainty == 0.0 && f.samples == 1000));
}

TEST_CASE("noise: what cannot be said has its reason", "[measure]") {
    const auto fault_of = [](const std::vector<double>& x, const std::vector<double>& y) {
        NoiseRatioMeasure ratio;
        ratio.add(x, y);
        CHECK(ratio.value().figures.has_value() == (ratio.value().fault == NoiseFault::none));
        return ratio.value().fault;
    };
    const auto excess_fault_of = [](const std::vector<double>& r, const std::vector<double>& y) {
        ExcessNoiseMeasure excess;
        excess.add(r, y);
        CHECK(excess.value().figures.has_value() == (excess.value().fault == NoiseFault::none));
        return excess.value().fault;
    };
    CHECK(fault_of({}, {}) == NoiseFault::too_short);
    CHECK(fault_of(noise(255, 1), noise(255, 2)) == NoiseFault::too_short);
    CHECK(fault_of(noise(256, 1), noise(256, 2)) == NoiseFault::none);
    CHECK(fault_of(std::vector<double>(300, 0.1), noise(300, 2)) == NoiseFault::silent_stimulus);
    CHECK(excess_fault_of(noise(255, 1), noise(255, 2)) == NoiseFault::too_short);
    CHECK(excess_fault_of(noise(256, 1), noise(256, 2)) == NoiseFault::none);
    for (const double bad :
         {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity(), 1e200}) {
        for (const std::size_t at : {0u, 500u, 999u}) {
            auto spoilt = noise(1000, 3);
            spoilt[at] = bad;
            CHECK(fault_of(spoilt, noise(1000, 4)) == NoiseFault::not_finite);
            CHECK(fault_of(noise(1000, 4), spoilt) == NoiseFault::not_finite);
            CHECK(excess_fault_of(noise(1000, 4), spoilt) == NoiseFault::not_finite);
        }
    }
}

TEST_CASE("noise: any split gives the same figures, bit for bit", "[measure]") {
    const auto x = noise(10007, 71), y = noise(10007, 72);
    NoiseRatioMeasure whole_ratio;
    ExcessNoiseMeasure whole_excess;
    whole_ratio.add(x, y);
    whole_excess.add(x, y);
    const auto ratio = *whole_ratio.value().figures;
    const auto excess = *whole_excess.value().figures;
    for (const Split split : every_split) {
        NoiseRatioMeasure cut_ratio;
        ExcessNoiseMeasure cut_excess;
        for_blocks(split, x.size(), [&](std::size_t first, std::size_t count) {
            cut_ratio.add(std::span(x).subspan(first, count), std::span(y).subspan(first, count));
            cut_excess.add(std::span(x).subspan(first, count), std::span(y).subspan(first, count));
        });
        const auto r = *cut_ratio.value().figures;
        const auto e = *cut_excess.value().figures;
        CHECK((r.ratio.value == ratio.ratio.value && r.ratio.standard_uncertainty == ratio.ratio.standard_uncertainty));
        CHECK((r.stimulus_mean == ratio.stimulus_mean && r.response_power == ratio.response_power));
        CHECK(
            (e.power.value == excess.power.value && e.power.standard_uncertainty == excess.power.standard_uncertainty));
        CHECK((e.bias.value == excess.bias.value && e.bias.standard_uncertainty == excess.bias.standard_uncertainty));
    }
}
