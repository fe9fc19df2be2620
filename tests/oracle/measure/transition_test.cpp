#include "oracle/measure/transition.hpp"

#include <algorithm>
#include <numbers>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/measure/transition_records.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

double rounded(double x, bool down) { return down ? std::floor(x) : std::floor(x + 0.5); }

}  // namespace

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
        CHECK(f.duration_samples.figure->standard_uncertainty == 0.0);
        CHECK(uncertainty(f.duration_samples) == Approx(uncertainty(f.low_instant) + uncertainty(f.high_instant)));
        CHECK(std::fabs(value(f.settling_samples) - 0.4 * codes / slope) <=
              2.0 * uncertainty(f.settling_samples) + 1e-9);
        CHECK(uncertainty(f.overshoot_percent) == Approx(100.0 / codes));
    }
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
    CHECK(holds_95_percent(final_value, rounds));
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

// Boards 1021 and 4814 of the right ones: an FIR and a cascade that swing across their 50 % before they go through it,
// on few codes. A code decides there which crossing is the first, and with it what lies before and behind.
TEST_CASE("transition: a code that makes another crossing the first one is in the bounds", "[measure]") {
    Random random(32);
    INFO("seed 32");
    int moved = 0;
    for (int round = 0; round < test::rounds_of(4000); ++round) {
        // The step response of random taps.
        const auto taps = static_cast<std::size_t>(random.whole(3, 25));
        const double scale = random.between(2.0, 40.0);
        std::vector<double> ideal(150, 0.0), codes(150, 0.0);
        double level = 0.0;
        for (std::size_t n = 0; n < ideal.size(); ++n) {
            if (n >= 20 && n < 20 + taps) level += scale * random.ratio() + 0.3 * scale;
            ideal[n] = level;
            codes[n] = rounded(level, round % 2 == 0);
        }
        auto question = question_of({0.0, level});
        question.lsb = 1.0;
        question.step_index = 20;
        question.band_percent = 10.0;
        const auto exact = measure_transition(question, ideal), found = measure_transition(question, codes);
        if (!exact.figures || !found.figures) continue;
        INFO("round " << round);
        using Figures = TransitionFigures;
        for (const auto figure :
             {&Figures::low_instant, &Figures::mid_instant, &Figures::high_instant, &Figures::duration_samples,
              &Figures::overshoot_percent, &Figures::undershoot_percent, &Figures::preshoot_percent,
              &Figures::early_overshoot_percent, &Figures::settling_samples}) {
            const TransitionFigure &truth = (*exact.figures).*figure, &told = (*found.figures).*figure;
            if (!truth.figure || !told.figure) continue;
            CHECK(std::fabs(truth.figure->value - told.figure->value) <= told.figure->bound + 1e-9);
            moved += std::fabs(truth.figure->value - told.figure->value) > 300.0 / std::fabs(level) &&
                     figure == &Figures::preshoot_percent;
        }
    }
    if (test::draws_all_rounds()) CHECK(moved > 0);
}
