#include "oracle/measure/transition.hpp"

#include <algorithm>
#include <functional>
#include <limits>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/support.hpp"
#include "tests/published/csv_table.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr std::int64_t before = 64;  // samples ahead of the step, a power of two so that instants stay exact

// before zeros, then y(n) for n = 0, 1 ..., all moved to levels first .. second.
std::vector<double> record_of(const std::function<double(double)>& y, std::size_t samples,
                              StateLevels levels = {0, 1}) {
    std::vector<double> record(static_cast<std::size_t>(before), levels.first);
    for (std::size_t n = 0; n < samples; ++n) {
        record.push_back(levels.first + (levels.second - levels.first) * y(static_cast<double>(n)));
    }
    return record;
}

TransitionQuestion question_of(StateLevels levels = {0, 1}) {
    TransitionQuestion question;
    question.step_index = before;
    question.levels = levels;
    return question;
}

TransitionFigures figures_of(const TransitionQuestion& question, std::span<const double> samples) {
    const auto answer = measure_transition(question, samples);
    REQUIRE(answer.figures);
    CHECK(answer.fault == TransitionFault::none);
    return *answer.figures;
}

double value(const TransitionFigure& figure) {
    INFO(reason_of(figure.fault));
    REQUIRE(figure.figure);
    CHECK(figure.fault == TransitionFault::none);
    return figure.figure->value;
}

double uncertainty(const TransitionFigure& figure) {
    REQUIRE(figure.figure);
    return figure.figure->standard_uncertainty;
}

TransitionFault fault_of(const TransitionFigure& figure) {
    CHECK(figure.figure.has_value() == (figure.fault == TransitionFault::none));
    return figure.fault;
}

TransitionFault fault_of(const TransitionQuestion& question, std::span<const double> samples) {
    const auto answer = measure_transition(question, samples);
    CHECK(answer.figures.has_value() == (answer.fault == TransitionFault::none));
    return answer.fault;
}

// Step of a second order with natural frequency 1, and its slope.
double second_order(double zeta, double t) {
    if (zeta == 1.0) return 1.0 - (1.0 + t) * std::exp(-t);
    if (zeta > 1.0) {
        const double root = std::sqrt(zeta * zeta - 1.0), fast = zeta + root, slow = zeta - root;
        return 1.0 - (fast * std::exp(-slow * t) - slow * std::exp(-fast * t)) / (2.0 * root);
    }
    const double w = std::sqrt(1.0 - zeta * zeta);
    return 1.0 - std::exp(-zeta * t) * (std::cos(w * t) + zeta / w * std::sin(w * t));
}

double slope_of_second_order(double zeta, double t) {
    const double h = 1e-5;
    return (second_order(zeta, t + h) - second_order(zeta, t - h)) / (2.0 * h);
}

double rounded(double x, bool down) { return down ? std::floor(x) : std::floor(x + 0.5); }

}  // namespace

// COMPUTED: check-values 1.
TEST_CASE("transition: the ramp of a moving average", "[measure][published]") {
    const CsvTable table("moving-average-summary.csv");
    const StateLevels levels =
        GENERATE(StateLevels{0, 1}, StateLevels{0, -1}, StateLevels{-0.25, 0.5}, StateLevels{5000.0, -3000.0});
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double m = table.number(row, "M ");
        INFO("points " << m << ", levels " << levels.first << " .. " << levels.second);
        const auto ramp = record_of([m](double n) { return std::min((n + 1.0) / m, 1.0); }, 400, levels);
        auto question = question_of(levels);
        question.band_percent = 5.0;
        const auto f = figures_of(question, ramp);
        // Straight lines are what is measured; z loses some 2^-53 of the larger level over the amplitude of 3/4 and
        // more, an instant M times that; a table of 16 digits no more.
        const double slack = 1e-14 * m;
        CHECK(value(f.duration_samples) == Approx(table.number(row, "step 10-90%")).margin(slack).epsilon(0));
        // z = (t + 1) / M
        CHECK(value(f.low_instant) == Approx(0.1 * m - 1.0).margin(slack).epsilon(0));
        CHECK(value(f.mid_instant) == Approx(0.5 * m - 1.0).margin(slack).epsilon(0));
        CHECK(value(f.high_instant) == Approx(0.9 * m - 1.0).margin(slack).epsilon(0));
        CHECK(value(f.settling_samples) == Approx(0.45 * m).margin(slack).epsilon(0));
        CHECK(value(f.final_value) == levels.second);
        for (const auto& aberration :
             {f.overshoot_percent, f.undershoot_percent, f.preshoot_percent, f.early_overshoot_percent}) {
            CHECK(value(aberration) < 1e-13);
        }
        for (const auto& exact : {f.duration_samples, f.mid_instant, f.settling_samples, f.final_value}) {
            CHECK(uncertainty(exact) == 0.0);
        }
    }
}

// COMPUTED: check-values 10.
TEST_CASE("transition: first order gives the published durations", "[measure][published]") {
    const CsvTable table("first-order-settling.csv");
    const double tau = 1000.0;
    const auto rise = record_of([tau](double n) { return -std::expm1(-n / tau); }, 18000);
    // |y''| / (8 |y'|) = 1 / (8 tau) samples at any instant, so 1 / (8 tau^2) time constants, twice in a duration.
    const double slack = 2.0 / (8.0 * tau * tau);
    const double mid = table.number(0, "value");
    int checked = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const std::string quantity = table.text(row, "quantity");
        const double expected = table.number(row, "value");
        INFO(quantity);
        auto question = question_of();
        const double percent = quantity.rfind("settling to ", 0) == 0 ? std::atof(quantity.c_str() + 12) : 0.0;
        if (quantity.rfind("50 %", 0) == 0) {
            CHECK(value(figures_of(question, rise).mid_instant) / tau == Approx(expected).margin(slack).epsilon(0));
        } else if (quantity.rfind("10-90", 0) == 0) {
            CHECK(value(figures_of(question, rise).duration_samples) / tau ==
                  Approx(expected).margin(slack).epsilon(0));
        } else if (quantity.rfind("20-80", 0) == 0) {
            question.low_percent = 20.0;
            question.high_percent = 80.0;
            CHECK(value(figures_of(question, rise).duration_samples) / tau ==
                  Approx(expected).margin(slack).epsilon(0));
        } else if (percent > 0.0) {
            // The table counts from the step, the figure from the 50 % instant.
            question.band_percent = percent;
            if (quantity.find("12 bit") != std::string::npos) question.band_percent = 100.0 / 8192.0;
            if (quantity.find("16 bit") != std::string::npos) question.band_percent = 100.0 / 131072.0;
            CHECK(value(figures_of(question, rise).settling_samples) / tau ==
                  Approx(expected - mid).margin(slack).epsilon(0));
        } else {
            continue;
        }
        ++checked;
    }
    CHECK(checked == 10);
}

// COMPUTED, overshoot's formula MEMORY (standard control text): check-values 10.
TEST_CASE("transition: second order gives the published overshoot, durations and settling", "[measure][published]") {
    const CsvTable table("second-order-step.csv");
    const double step = 0.005;  // of wn t a sample
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double zeta = table.number(row, "damping");
        INFO("zeta " << zeta);
        const double t2 = table.number(row, "2 % settling"), t5 = table.number(row, "5 % settling");
        const auto samples = static_cast<std::size_t>(std::max(2.0 * t2, 16.0) / step);
        const auto rise = record_of([&](double n) { return second_order(zeta, step * n); }, samples);
        auto question = question_of();
        const auto f = figures_of(question, rise);
        // |y''| <= 1 everywhere, so an instant is off by at most step^2 / 8 over the slope there (1.2: the slope
        // changes by less than a fifth over a sample), in wn t; the table's own digits are beyond that.
        const auto slack = [&](double t) {
            return 1.2 * step * step / 8.0 / std::fabs(slope_of_second_order(zeta, t));
        };
        const double low = step * value(f.low_instant), mid = step * value(f.mid_instant),
                     high = step * value(f.high_instant);
        CHECK(high - low == Approx(table.number(row, "10-90")).margin(slack(low) + slack(high)).epsilon(0));
        CHECK(second_order(zeta, mid) == Approx(0.5).margin(step * step / 8.0).epsilon(0));
        CHECK(mid + step * value(f.settling_samples) == Approx(t2).margin(slack(t2) + 1e-8).epsilon(0));
        question.band_percent = 5.0;
        CHECK(mid + step * value(figures_of(question, rise).settling_samples) ==
              Approx(t5).margin(slack(t5) + 1e-8).epsilon(0));
        // The sample nearest to the peak is at most half a sample off: 1/2 |y''| (step / 2)^2.
        CHECK(value(f.overshoot_percent) ==
              Approx(table.number(row, "overshoot")).margin(100.0 * step * step / 8.0 + 1e-12).epsilon(0));
        CHECK(value(f.preshoot_percent) == 0.0);
        CHECK(value(f.early_overshoot_percent) == 0.0);
        // The first swing back is the overshoot of the overshoot; its peak sampled likewise.
        const double overshoot = table.number(row, "overshoot") / 100.0;
        CHECK(value(f.undershoot_percent) ==
              Approx(100.0 * overshoot * overshoot).margin(100.0 * step * step / 8.0 + 1e-12).epsilon(0));
        CHECK(value(f.final_value) == Approx(1.0).margin(0.01).epsilon(0));
    }
}

TEST_CASE("transition: falling is rising, mirrored, to the last bits", "[measure]") {
    const auto ring = [](double n) { return second_order(0.3, 0.05 * n); };
    const auto up = figures_of(question_of({0, 1}), record_of(ring, 1000, {0, 1})),
               down = figures_of(question_of({0, -1}), record_of(ring, 1000, {0, -1}));
    CHECK(value(up.duration_samples) == value(down.duration_samples));
    CHECK(value(up.mid_instant) == value(down.mid_instant));
    CHECK(value(up.settling_samples) == value(down.settling_samples));
    CHECK(value(up.overshoot_percent) == value(down.overshoot_percent));
    CHECK(value(up.undershoot_percent) == value(down.undershoot_percent));
    CHECK(value(up.final_value) == -value(down.final_value));
}

TEST_CASE("transition: what a response does before is what its mirror in time does after", "[measure]") {
    // A linear-phase FIR of unit gain: a windowed sinc of 41 taps; its step response is its own mirror image.
    std::vector<double> taps(41);
    double sum = 0.0;
    for (int k = 0; k < 41; ++k) {
        const double x = k - 20, pi = std::numbers::pi;
        taps[static_cast<std::size_t>(k)] =
            (k == 20 ? 0.2 : std::sin(0.2 * pi * x) / (pi * x)) * (0.54 + 0.46 * std::cos(pi * x / 20.0));
        sum += taps[static_cast<std::size_t>(k)];
    }
    std::vector<double> record(200, 0.0);
    double y = 0.0;
    for (std::size_t n = 64; n < record.size(); ++n) {
        if (n < 64 + taps.size()) y += taps[n - 64] / sum;
        record[n] = y;
    }
    auto question = question_of();
    // Beyond the taps the sums stand within some 1e-16 of the levels: reached, to a step of 1e-12.
    question.lsb = 1e-12;
    const auto f = figures_of(question, record);
    CHECK(value(f.overshoot_percent) > 0.5);
    CHECK(value(f.preshoot_percent) == Approx(value(f.overshoot_percent)).margin(1e-10).epsilon(0));
    CHECK(value(f.early_overshoot_percent) == Approx(value(f.undershoot_percent)).margin(1e-10).epsilon(0));
    // 0.5 lies half a tap before the middle one: between y[19] and y[20], which are symmetric about it.
    CHECK(value(f.mid_instant) == Approx(19.5).margin(1e-11).epsilon(0));
    CHECK(value(f.high_instant) - 19.5 == Approx(19.5 - value(f.low_instant)).margin(1e-11).epsilon(0));
}

TEST_CASE("transition: on few codes the instants are sure to an LSB over the slope", "[measure]") {
    Random random(31);
    for (int round = 0; round < test::rounds_of(2000); ++round) {
        const double codes = random.between(24.0, 200.0), slope = random.between(0.05, 2.0),
                     start = random.between(3, 4);
        const bool down = round % 2 == 0;
        const auto samples = static_cast<std::size_t>(1.5 * codes / slope) + 200;
        const auto ideal = [&](double n) { return std::clamp(slope * (n - start), 0.0, codes); };
        std::vector<double> record = record_of([&](double n) { return rounded(ideal(n), down); }, samples);
        auto question = question_of({0.0, codes});
        question.lsb = 1.0;
        question.band_percent = 10.0;
        const auto f = figures_of(question, record);
        const struct {
            const TransitionFigure& figure;
            double level;
        } instants[] = {{f.low_instant, 0.1}, {f.mid_instant, 0.5}, {f.high_instant, 0.9}};
        for (const auto& [figure, level] : instants) {
            // Off by no more than what is said, whatever the rounding; two neighbouring codes come at least
            // 1 / slope - 1 samples apart, two pairs of them at least 2 / slope - 1.
            CHECK(std::fabs(value(figure) - (start + level * codes / slope)) <= uncertainty(figure) + 1e-9);
            CHECK(uncertainty(figure) >= 1.0 / slope - 0.5 - 1e-9);
            CHECK(uncertainty(figure) <= 1.0 / slope + 2.0);
        }
        CHECK(uncertainty(f.duration_samples) ==
              Approx(std::hypot(uncertainty(f.low_instant), uncertainty(f.high_instant))));
        CHECK(std::fabs(value(f.settling_samples) - 0.4 * codes / slope) <=
              2.0 * uncertainty(f.settling_samples) + 1e-9);
        CHECK(uncertainty(f.overshoot_percent) == Approx(100.0 / codes));
    }
}

TEST_CASE("transition: a level within an LSB of a state has no instant", "[measure]") {
    // 8 codes: 10 % is 0.8 LSB, 90 % is 7.2 of 8, the band of 2 % 0.16 LSB; 50 % is well inside.
    const auto record = record_of([](double n) { return std::floor(std::min(n * 0.125, 8.0)); }, 200);
    auto question = question_of({0, 8});
    question.lsb = 1.0;
    const auto f = figures_of(question, record);
    CHECK(fault_of(f.low_instant) == TransitionFault::too_coarse);
    CHECK(fault_of(f.high_instant) == TransitionFault::too_coarse);
    CHECK(fault_of(f.duration_samples) == TransitionFault::too_coarse);
    CHECK(fault_of(f.settling_samples) == TransitionFault::too_coarse);
    // floor(n / 8) goes from 3 to 4 between n = 31 and 32, from 2 to 3 and from 4 to 5 eight samples away
    CHECK(value(f.mid_instant) == 32.0);
    CHECK(uncertainty(f.mid_instant) == 8.0);
    CHECK(value(f.final_value) == 8.0);
}

TEST_CASE("transition: under noise the figures hold the truth as often as said", "[measure]") {
    const double tau = 50.0, deviation = 0.002;
    const int rounds = test::rounds_of(1000);
    Gaussian noise(3003);
    int low = 0, mid = 0, high = 0, duration = 0, settling = 0, final_value = 0;
    double said = 0.0, was = 0.0;
    for (int round = 0; round < rounds; ++round) {
        auto record = record_of([tau](double n) { return -std::expm1(-n / tau); }, 1600);
        for (double& sample : record) sample += deviation * noise.next();
        const auto f = figures_of(question_of(), record);
        const auto is_held = [](const TransitionFigure& figure, double truth) {
            return holds(value(figure), uncertainty(figure), truth) ? 1 : 0;
        };
        low += is_held(f.low_instant, -tau * std::log(0.9));
        mid += is_held(f.mid_instant, tau * std::log(2.0));
        high += is_held(f.high_instant, tau * std::log(10.0));
        duration += is_held(f.duration_samples, tau * std::log(9.0));
        settling += is_held(f.settling_samples, tau * std::log(25.0));
        // 7 degrees of freedom: 2.365 for 95 % (Student, of any table)
        final_value += std::fabs(value(f.final_value) - 1.0) <= 2.364624 * uncertainty(f.final_value);
        said += std::pow(uncertainty(f.duration_samples), 2);
        was += std::pow(value(f.duration_samples) - tau * std::log(9.0), 2);
    }
    INFO(low << ' ' << mid << ' ' << high << ' ' << duration << ' ' << settling << " of " << rounds);
    // Said to be as noisy as a sample, where a line between two has 1/2 .. 1 of its variance: at least 95 %, less the
    // binomial's 3.7 deviations, and at most twice the variance that they had, with 3 deviations of its own.
    const double n = rounds;
    for (const int held : {low, mid, high, duration, settling}) {
        CHECK(held >= 0.95 * n - 3.7 * std::sqrt(0.95 * 0.05 * n));
    }
    CHECK(is_binomial(final_value, rounds, 0.95));
    CHECK(said > was);
    CHECK(said < 2.0 * was * (1.0 + 3.0 * std::sqrt(2.0 / n)));
}

TEST_CASE("transition: levels that nobody gave come from the histogram", "[measure]") {
    const bool falls = GENERATE(false, true);
    const StateLevels levels = falls ? StateLevels{0.75, 0.25, 0} : StateLevels{0.25, 0.75, 0};
    auto record = record_of([](double n) { return second_order(0.4, 0.1 * n); }, 1000, levels);
    Gaussian noise(12);
    for (double& sample : record) sample += 1e-4 * noise.next();
    auto question = question_of();
    question.levels.reset();
    const auto f = figures_of(question, record);
    CHECK_FALSE(f.levels_are_given);
    // The range is the amplitude and 25 % of overshoot: bins of 0.00626. The states lie within one.
    const double bin = 0.5 * 1.2538 / 100.0;
    CHECK(f.levels.standard_uncertainty == Approx(bin / std::sqrt(12.0)).epsilon(0.01));
    CHECK(f.levels.first == Approx(levels.first).margin(bin).epsilon(0));
    CHECK(f.levels.second == Approx(levels.second).margin(bin).epsilon(0));
    CHECK(std::fabs(value(f.duration_samples) - 14.63491203) < 2.0 * uncertainty(f.duration_samples));
    CHECK(uncertainty(f.duration_samples) > 0.0);
    CHECK(std::fabs(value(f.overshoot_percent) - 25.3826722) < 2.0 * uncertainty(f.overshoot_percent));
}

TEST_CASE("state levels: the fullest bins, outermost of equals, in order of time", "[measure]") {
    // 0 .. 100: a bin is 1 wide. Two samples in bin 3, one in bin 0; two in bins 97 and 99 each.
    const std::vector<double> samples{3.25, 3.75, 0.0, 20.0, 50.0, 97.5, 97.75, 99.5, 100.0};
    const auto levels = state_levels_of(samples);
    REQUIRE(levels);
    CHECK((levels->first == 3.5 && levels->second == 99.75));
    CHECK(levels->standard_uncertainty == 1.0 / std::sqrt(12.0));
    const std::vector<double> backwards(samples.rbegin(), samples.rend());
    CHECK((state_levels_of(backwards)->first == 99.75 && state_levels_of(backwards)->second == 3.5));
    CHECK_FALSE(state_levels_of(std::vector<double>(9, 1.0)));
    CHECK_FALSE(state_levels_of(std::vector<double>{0.0, 1.0, 1.0, 0.0}));
    CHECK_FALSE(state_levels_of(std::vector<double>{0.0, std::numeric_limits<double>::quiet_NaN(), 1.0}));
    CHECK_FALSE(state_levels_of({}));
}

TEST_CASE("transition: what cannot be said has its reason, and the rest is said", "[measure]") {
    const auto rise = [](double n) { return -std::expm1(-n / 50.0); };
    SECTION("it never reaches 90 %") {
        const auto f = figures_of(question_of(), record_of([&](double n) { return 0.85 * rise(n); }, 2000));
        CHECK(fault_of(f.high_instant) == TransitionFault::never_reaches);
        CHECK(fault_of(f.duration_samples) == TransitionFault::never_reaches);
        CHECK(fault_of(f.settling_samples) == TransitionFault::not_settled);
        CHECK(value(f.mid_instant) > 0.0);
        CHECK(value(f.final_value) == Approx(0.85).margin(1e-6).epsilon(0));
    }
    SECTION("it never moves") {
        const auto f = figures_of(question_of(), record_of([](double) { return 0.0; }, 2000));
        for (const auto& figure : {f.low_instant, f.mid_instant, f.high_instant, f.duration_samples,
                                   f.overshoot_percent, f.preshoot_percent, f.settling_samples}) {
            CHECK(fault_of(figure) == TransitionFault::never_reaches);
        }
        CHECK(value(f.final_value) == 0.0);
    }
    SECTION("it stands beyond from the start") {
        const auto f = figures_of(question_of(), record_of([](double) { return 1.0; }, 200, {1.0, 1.0}));
        CHECK(fault_of(f.mid_instant) == TransitionFault::starts_beyond);
        auto offset = record_of(rise, 800);
        for (double& sample : offset) sample = std::max(sample, 0.2);
        CHECK(fault_of(figures_of(question_of(), offset).low_instant) == TransitionFault::starts_beyond);
        CHECK(value(figures_of(question_of(), offset).high_instant) > 100.0);
    }
    SECTION("the record ends before it settles, and while it moves") {
        // Settled to 2 % after 196 samples, to 0.1 % after 345. A quarter of 300 begins at 225, of 250 at 187.5.
        CHECK(figures_of(question_of(), record_of(rise, 300)).settling_samples.figure);
        const auto f = figures_of(question_of(), record_of(rise, 250));
        CHECK(fault_of(f.settling_samples) == TransitionFault::not_settled);
        CHECK(figures_of(question_of(), record_of(rise, 300)).final_value.figure);
        // Halves of a quarter of 120: exp(-97/50) - exp(-112/50) = 3.7 % apart.
        CHECK(fault_of(figures_of(question_of(), record_of(rise, 120)).final_value) == TransitionFault::still_moving);
    }
    SECTION("a ring that happens to end inside the band has not settled") {
        auto ring = record_of([](double n) { return 1.0 + 0.5 * std::sin(0.01 * n); }, 2000);
        ring.resize(static_cast<std::size_t>(before) + 1888);  // 0.01 n = 6 pi + 0.03
        CHECK(fault_of(figures_of(question_of(), ring).settling_samples) == TransitionFault::not_settled);
    }
    SECTION("NaN and infinity, anywhere") {
        for (const double bad : {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity()}) {
            for (const std::size_t at : {0u, 70u, 863u}) {
                auto record = record_of(rise, 800);
                record[at] = bad;
                CHECK(fault_of(question_of(), record) == TransitionFault::not_finite);
            }
            CHECK(fault_of(question_of({0, bad}), record_of(rise, 800)) == TransitionFault::not_finite);
        }
    }
    SECTION("no two levels") {
        CHECK(fault_of(question_of({1, 1}), record_of(rise, 800)) == TransitionFault::no_transition);
        auto question = question_of();
        question.levels.reset();
        CHECK(fault_of(question, std::vector<double>(100, 0.5)) == TransitionFault::no_transition);
    }
    SECTION("too few samples and too many") {
        auto question = question_of();
        question.step_index = 16;
        const std::vector<double> zeros(32, 0.0);
        CHECK(fault_of(question, std::span(zeros).first(31)) == TransitionFault::too_short);
        CHECK(fault_of(question, zeros) == TransitionFault::none);
        question.step_index = 17;  // 15 left
        CHECK(fault_of(question, zeros) == TransitionFault::too_short);
        CHECK(fault_of(question_of(), std::vector<double>(transition_most_samples + 1)) == TransitionFault::too_long);
    }
}

TEST_CASE("transition: of several crossings those next to the 50 % instant count", "[measure]") {
    // Up to 0.2 and back, then the transition, down to 0.8 and up again.
    std::vector<double> record(64, 0.0);
    for (const double z : {0.2, 0.0, 0.0, 0.4, 0.6, 1.0, 0.8, 1.0, 0.4, 1.0}) record.push_back(z);
    record.insert(record.end(), 64, 1.0);
    const auto f = figures_of(question_of(), record);
    CHECK(value(f.low_instant) == Approx(2.25).epsilon(1e-14));
    CHECK(value(f.mid_instant) == Approx(3.5).epsilon(1e-14));
    CHECK(value(f.high_instant) == Approx(4.75).epsilon(1e-14));
    CHECK(value(f.early_overshoot_percent) == Approx(20.0).epsilon(1e-14));
    CHECK(value(f.undershoot_percent) == Approx(60.0).epsilon(1e-14));
    CHECK(value(f.settling_samples) == Approx(8.0 + 0.58 / 0.6 - 3.5).epsilon(1e-14));  // into 0.98 on the last way up
}

TEST_CASE("transition: noise in the final stretch is not a movement", "[measure]") {
    // Means of halves of 32 samples stray by 0.05 sqrt(2 / 32) = 1.25 %, the half band is 0.1 %.
    Gaussian noise(44);
    auto question = question_of();
    question.band_percent = 0.2;
    question.final_samples = 64;
    int given = 0;
    const int rounds = test::rounds_of(300);
    for (int round = 0; round < rounds; ++round) {
        auto record = record_of([](double) { return 1.0; }, 100);
        for (double& sample : record) sample += 0.05 * noise.next();
        const auto f = figures_of(question, record);
        given += f.final_value.figure.has_value();
    }
    // 6 degrees of freedom within the halves: beyond 4 of its deviations in 0.7 % of all rounds: 2 of 300.
    CHECK(given + 4 >= 0.993 * rounds);
}

TEST_CASE("transition: a question out of range is refused", "[measure]") {
    const auto record = record_of([](double n) { return -std::expm1(-n / 50.0); }, 800);
    const auto refused = [&](void (*change)(TransitionQuestion&)) {
        auto question = question_of();
        change(question);
        return fault_of(question, record) == TransitionFault::bad_question;
    };
    CHECK_FALSE(refused([](TransitionQuestion&) {}));
    CHECK(refused([](TransitionQuestion& q) { q.low_percent = 0.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.low_percent = 50.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.high_percent = 50.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.high_percent = 100.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.band_percent = 0.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.band_percent = 50.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.band_percent = std::nan(""); }));
    CHECK(refused([](TransitionQuestion& q) { q.lsb = -1.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.step_index = -1; }));
    CHECK(refused([](TransitionQuestion& q) { q.step_index = before + 800; }));
    CHECK(refused([](TransitionQuestion& q) { q.final_samples = 15; }));
}

TEST_CASE("transition: any split gives the same figures, of the window alone", "[measure]") {
    auto long_run = record_of([](double n) { return second_order(0.5, 0.1 * n); }, 700);
    const auto whole = figures_of(question_of(), long_run);
    const std::size_t skipped = 1000;
    std::vector<double> run(skipped, std::nan(""));
    run.insert(run.end(), long_run.begin(), long_run.end());
    run.insert(run.end(), 500, std::nan(""));
    for (const Split split : every_split) {
        TransitionMeasure measure(question_of(), static_cast<std::int64_t>(skipped), long_run.size());
        for_blocks(split, run.size(),
                   [&](std::size_t first, std::size_t count) { measure.add(std::span(run).subspan(first, count)); });
        const auto answer = measure.value();
        REQUIRE(answer.figures);
        CHECK(value(answer.figures->duration_samples) == value(whole.duration_samples));
        CHECK(value(answer.figures->settling_samples) == value(whole.settling_samples));
        CHECK(value(answer.figures->final_value) == value(whole.final_value));
        CHECK(value(answer.figures->overshoot_percent) == value(whole.overshoot_percent));
    }
    CHECK(TransitionMeasure(question_of(), 0, transition_most_samples + 1).value().fault == TransitionFault::too_long);
}
