#include "oracle/measure/drift.hpp"

#include <functional>
#include <limits>

#include "oracle/measure/quantile.hpp"
#include "oracle/measure/series_variance.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/support.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::vector<double> errors_of(std::size_t length, const std::function<double(double)>& error) {
    std::vector<double> errors(length);
    for (std::size_t n = 0; n < length; ++n) errors[n] = error(static_cast<double>(n));
    return errors;
}

DriftAnswer answer_of(std::span<const double> errors, std::optional<double> rate_hz = std::nullopt) {
    DriftMeasure measure(rate_hz);
    measure.add(std::vector<double>(errors.size(), 0.0), errors);
    return measure.value();
}

DriftFigures figures_of(std::span<const double> errors, std::optional<double> rate_hz = std::nullopt) {
    const auto answer = answer_of(errors, rate_hz);
    REQUIRE(answer.figures);
    CHECK(answer.fault == DriftFault::none);
    return *answer.figures;
}

bool is_held(const Figure& figure, int degrees, double truth) {
    return std::fabs(figure.value - truth) <= student_quantile_above(0.025, degrees) * figure.standard_uncertainty;
}

// First order, of variance 1.
class Correlated {
public:
    Correlated(double correlation, std::uint64_t seed) : a_(correlation), gaussian_(seed), state_(gaussian_.next()) {}
    double next() { return state_ = a_ * state_ + std::sqrt(1.0 - a_ * a_) * gaussian_.next(); }

private:
    double a_;
    Gaussian gaussian_;
    double state_;
};

}  // namespace

TEST_CASE("drift: a straight line is found exactly, whatever its length", "[measure]") {
    for (const std::size_t length : {256u, 257u, 383u, 1000u, 100003u}) {
        INFO("length " << length);
        // Multiples of 2^-20, so sums are exact; means, products and the quotient round some 2^-53 of the range.
        const double slope = -0x3p-20;
        const auto f = figures_of(errors_of(length, [slope](double n) { return 5.0 + slope * n; }));
        const double range = std::fabs(slope) * static_cast<double>(length), slack = 1e-14 * (5.0 + range);
        CHECK(f.slope_per_sample.value == Approx(slope).epsilon(1e-13));
        CHECK(f.intercept.value == Approx(5.0).margin(slack).epsilon(0));
        CHECK(f.change_over_run.value == Approx(slope * static_cast<double>(length - 1)).epsilon(1e-13));
        CHECK(f.change_over_run.standard_uncertainty < slack);
        CHECK(f.degrees == 32);
        CHECK((f.samples == static_cast<std::int64_t>(length) && f.first_index == 0));
        CHECK((f.blocks > 128 && f.blocks <= 256));
        const auto full = static_cast<std::int64_t>(length) / f.block_samples;
        CHECK(f.last_less_first.value ==
              Approx(slope * static_cast<double>((full - 1) * f.block_samples)).margin(slack).epsilon(0));
        CHECK(f.largest_change == f.last_less_first.value);
        CHECK(f.largest_change_index == (full - 1) * f.block_samples);
        CHECK_FALSE(f.slope_per_hour);
    }
}

TEST_CASE("drift: slope per hour, intercept and indices follow rate and start", "[measure]") {
    DriftMeasure measure(1200.0);
    measure.start_at(1'000'000'000'000);
    const auto errors = noise(3000, 17);
    measure.add(std::vector<double>(3000, 0.25), errors);
    const auto f = *measure.value().figures;
    CHECK(f.slope_per_hour->value == f.slope_per_sample.value * 4'320'000.0);
    CHECK(f.slope_per_hour->standard_uncertainty == f.slope_per_sample.standard_uncertainty * 4'320'000.0);
    CHECK(f.first_index == 1'000'000'000'000);
    CHECK(f.largest_change_index > 1'000'000'000'000);
    CHECK(f.intercept.value == Approx(figures_of(errors).intercept.value - 0.25).margin(1e-12).epsilon(0));
}

TEST_CASE("drift: an error that went and came back shows in the largest change", "[measure]") {
    const auto f = figures_of(errors_of(25600, [](double n) { return n >= 10000.0 && n < 10100.0 ? -3.0 : 1.0; }));
    CHECK(f.block_samples == 100 * 256 / 200);  // 128: 200 blocks
    CHECK(f.largest_change == Approx(-4.0 * 100.0 / 128.0).epsilon(1e-12));
    CHECK(f.largest_change_index == 9984);  // 78 x 128, whose block holds all of 10000 .. 10099
    CHECK(f.last_less_first.value == 0.0);
}

TEST_CASE("drift: an error that stands still has no slope and no doubt", "[measure]") {
    const auto f = figures_of(errors_of(5000, [](double) { return -0x1p-15; }));
    CHECK((f.slope_per_sample.value == 0.0 && f.slope_per_sample.standard_uncertainty == 0.0));
    CHECK((f.intercept.value == -0x1p-15 && f.largest_change == 0.0 && f.largest_change_index == 0));
}

TEST_CASE("drift: white errors are as sure as least squares says", "[measure]") {
    // Of single samples var slope = 12 s^2 / (N (N^2 - 1)); means of 128 and more blocks lose less than 1 / 128^2.
    const int rounds = test::rounds_of(2000);
    const double n = 1000.0;
    Gaussian noise(505);
    double said = 0.0, was = 0.0, ends = 0.0, intercepts = 0.0;
    int slope = 0, intercept = 0, end = 0;
    for (int round = 0; round < rounds; ++round) {
        const auto f = figures_of(errors_of(1000, [&](double k) { return 0.5 - 1e-4 * k + 0.1 * noise.next(); }));
        slope += is_held(f.slope_per_sample, f.degrees, -1e-4);
        intercept += is_held(f.intercept, f.degrees, 0.5);
        end += is_held(f.last_less_first, f.degrees, -1e-4 * 996.0);  // blocks of 4 samples, 249 steps apart
        said += std::pow(f.slope_per_sample.standard_uncertainty, 2) / rounds;
        was += std::pow(f.slope_per_sample.value + 1e-4, 2) / rounds;
        ends += std::pow(f.last_less_first.standard_uncertainty, 2) / rounds;
        intercepts += std::pow(f.intercept.standard_uncertainty, 2) / rounds;
    }
    for (const int held : {slope, intercept, end}) CHECK(holds_95_percent(held, rounds));
    // Each variance has 32 degrees of freedom, the true squares one each: 4 deviations.
    const double closed = 12.0 * 0.01 / (n * (n * n - 1.0));
    CHECK(said == Approx(closed).epsilon(4.0 * std::sqrt(2.0 / 32.0 / rounds)));
    CHECK(was == Approx(closed).epsilon(4.0 * std::sqrt(2.0 / rounds)));
    CHECK(ends == Approx(2.0 * 0.01 / 4.0).epsilon(4.0 * std::sqrt(2.0 / 32.0 / rounds)));
    // At the first sample: s^2 / N + (N / 2)^2 var slope = 4 s^2 / N
    CHECK(intercepts == Approx(4.0 * 0.01 / n).epsilon(4.0 * std::sqrt(2.0 / 32.0 / rounds) + 2.0 / n));
}

TEST_CASE("drift: correlated errors are held as often as promised", "[measure]") {
    // 0.9 from sample to sample: 300 / (1 - 0.9) is the shortest run that is said to be long enough; taken for
    // independent, such errors would be held in 35 % of all rounds.
    const std::size_t length = GENERATE(3000u, 6400u);
    const int rounds = test::rounds_of(2000);
    int slope = 0, change = 0;
    Correlated noise(0.9, 606);
    for (int round = 0; round < rounds; ++round) {
        const auto f = figures_of(errors_of(length, [&](double n) { return 2e-5 * n + noise.next(); }));
        slope += is_held(f.slope_per_sample, f.degrees, 2e-5);
        change += is_held(f.change_over_run, f.degrees, 2e-5 * static_cast<double>(length - 1));
    }
    CHECK(holds_95_percent(slope, rounds));
    CHECK(change == slope);
}

TEST_CASE("drift: rounded ramps are held, with noise as often as promised, without at least as often", "[measure]") {
    const int rounds = test::rounds_of(2000);
    Random random(707);
    Gaussian noise(708);
    int with_noise = 0, bare = 0, steep = 0;
    for (int round = 0; round < rounds; ++round) {
        const double slope = random.between(-0.004, 0.004), start = random.between(-0.5, 0.5);
        const auto ramp = [&](double n) { return start + slope * n; };
        const auto noisy =
            figures_of(errors_of(4000, [&](double n) { return std::floor(ramp(n) + 0.6 * noise.next() + 0.5); }));
        with_noise += is_held(noisy.slope_per_sample, noisy.degrees, slope);
        const auto stairs = figures_of(errors_of(4000, [&](double n) { return std::floor(ramp(n) + 0.5); }));
        // sum |x| / 2 over sum x^2, of 4000 samples: 1.5 / 4000 and some 1e-4 of it for the blocks
        CHECK(std::fabs(stairs.slope_per_sample.value - slope) <= 1.501 / 4000.0);
        if (std::fabs(slope) < 0.001) continue;  // fewer than four steps
        ++steep;
        bare += is_held(stairs.slope_per_sample, stairs.degrees, slope);
    }
    CHECK(holds_95_percent(with_noise, rounds));
    CHECK(steep > rounds / 2);
    CHECK(bare >= 0.95 * steep);
}

TEST_CASE("drift: what cannot be said has its reason", "[measure]") {
    CHECK(answer_of({}).fault == DriftFault::too_short);
    CHECK(answer_of(std::vector<double>(255, 1.0)).fault == DriftFault::too_short);
    CHECK(answer_of(std::vector<double>(256, 1.0)).fault == DriftFault::none);
    for (const double bad : {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity()}) {
        for (const std::size_t at : {0u, 1000u, 1999u}) {
            std::vector<double> errors(2000, 1.0);
            errors[at] = bad;
            CHECK(answer_of(errors).fault == DriftFault::not_finite);
            CHECK_FALSE(answer_of(errors).figures);
        }
    }
}

TEST_CASE("drift: any split gives the same figures, bit for bit", "[measure]") {
    const auto reference = noise(20011, 81), response = noise(20011, 82);
    DriftMeasure whole(50.0);
    whole.add(reference, response);
    const auto expected = *whole.value().figures;
    for (const Split split : every_split) {
        DriftMeasure measure(50.0);
        for_blocks(split, reference.size(), [&](std::size_t first, std::size_t count) {
            measure.add(std::span(reference).subspan(first, count), std::span(response).subspan(first, count));
            if (split == Split::prime) (void)measure.value();
        });
        const auto f = *measure.value().figures;
        for (const auto member : {&DriftFigures::slope_per_sample, &DriftFigures::intercept,
                                  &DriftFigures::change_over_run, &DriftFigures::last_less_first}) {
            CHECK((f.*member).value == (expected.*member).value);
            CHECK((f.*member).standard_uncertainty == (expected.*member).standard_uncertainty);
        }
        CHECK((f.largest_change == expected.largest_change && f.blocks == expected.blocks));
    }
}

TEST_CASE("drift: a slope far below the errors survives a long run", "[measure]") {
    // +-1000 in turns and 2^-30 a sample: every block of an even length has a mean of the ramp alone.
    const auto f = figures_of(
        errors_of(1 << 20, [](double n) { return (std::fmod(n, 2.0) == 0.0 ? 1000.0 : -1000.0) + 0x1p-30 * n; }));
    CHECK(f.slope_per_sample.value == Approx(0x1p-30).epsilon(1e-12));
}

TEST_CASE("long-run variance: a mean of uneven blocks, by hand", "[measure]") {
    CHECK_FALSE(series_variance(std::vector<double>(7, 1.0), std::vector<double>(7, 1.0), FittedCourse::constant));
    const std::vector<double> ones(8, 1.0);
    // K = (8 - 1) / 2 = 3. A cosine of 2 half cycles over 8 equal blocks has length sqrt(8 / 2) = 2, is orthogonal to
    // the two others and has projection 2: 4 / 3.
    std::vector<double> means(8);
    for (std::size_t b = 0; b < 8; ++b)
        means[b] = std::cos(std::numbers::pi * 2.0 * (static_cast<double>(b) + 0.5) / 8.0);
    const auto constant = series_variance(means, ones, FittedCourse::constant);
    REQUIRE(constant);
    CHECK(constant->degrees == 3);
    CHECK(constant->variance == Approx(4.0 / 3.0).epsilon(1e-13));
    // A line does not reach what is beside a line, but it does reach what is beside a constant.
    for (std::size_t b = 0; b < 8; ++b) means[b] = 7.0 - 2.0 * static_cast<double>(b);
    CHECK(series_variance(means, ones, FittedCourse::line)->variance < 1e-25);
    CHECK(series_variance(means, ones, FittedCourse::constant)->variance > 1.0);
}
