// Phase and group delay of the response rule: published delays, a fault that only the phase shows, and how often the
// intervals hold.
#include "oracle/judge/response_phase.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

#include "tests/oracle/judge/judging.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using halflsb::testing::Gaussian;

namespace {

Case noise_case(const Plan& plan, const ParameterValues& rule_words, std::int64_t length = 120000) {
    return a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", length}}),
                  {rule(plan, "response", rule_words)});
}

Plan fir_plan(std::vector<double> taps) {
    Plan plan = moving_average_plan();
    FilterStage stage;
    stage.design = Fir{std::move(taps)};
    plan.filter = {stage};
    return plan;
}

}  // namespace

TEST_CASE("phase: a moving average of M points has nulls at k / M and a delay of (M - 1) / 2", "[judge]") {
    for (const int points : {4, 10, 16}) {
        INFO(points << " points");
        const Plan plan = moving_average_plan(points);
        const double delay = (points - 1) / 2.0;
        const double null_hz = plan.signal.rate_hz / points;
        // -3 dB of 10 points at 0.044487 of the rate; 0 dB at 0; nulls at k / M (check values of docs/methods.md).
        ParameterValues words =
            values({{"bands", std::vector<std::vector<double>>{{0.0, 1.0, -0.05, 0.05},
                                                               {null_hz - 0.3, null_hz + 0.3, -no_limit, -35.0}}},
                    {"phase_relative_to", std::string("absolute")},
                    {"min_group_delay_samples", delay - 0.05},
                    {"max_group_delay_samples", delay + 0.05},
                    {"delta_samples", 0.02}});
        const Case the_case = noise_case(plan, words);
        const RuleVerdict right = judge(plan, the_case, right_response(plan, the_case)).rules[0];
        INFO(right.reason);
        CHECK(right.verdict == Verdict::pass);
        REQUIRE(right.figures.size() == 5);
        CHECK(right.figures[3].name == "lowest group delay");
        CHECK(right.figures[3].value.value() == Approx(delay).margin(0.02));
        CHECK(right.figures[4].unit == "samples");
        // One more point: half a sample later, in the phase of the board alone.
        const Plan longer = moving_average_plan(points + 1);
        const RuleVerdict wrong = judge(plan, the_case, right_response(longer, noise_case(longer, words))).rules[0];
        REQUIRE(wrong.figures.size() == 5);
        CHECK(wrong.figures[4].verdict == Verdict::fail);
        CHECK(wrong.figures[4].value.value() == Approx(delay + 0.5).margin(0.05));
    }
}

TEST_CASE("phase: reversed taps have the same gain, and the phase finds them", "[judge]") {
    const std::vector<double> taps{0.5, 0.3, 0.15, 0.05};
    const Plan plan = fir_plan(taps), reversed = fir_plan({taps.rbegin(), taps.rend()});
    const ParameterValues gain = values(
        {{"bands", std::vector<std::vector<double>>{{5.0, 200.0, -0.1, 0.1}}}, {"relative_to", std::string("design")}});
    const ParameterValues phase = values({{"max_phase_deg", 2.0}});
    const ParameterValues delay = values({{"max_group_delay_samples", 0.2}});
    const auto verdict = [&](const Plan& board, const ParameterValues& words) {
        const Case the_case = noise_case(plan, words);
        return judge(plan, the_case, right_response(board, noise_case(board, words))).rules[0];
    };
    for (const ParameterValues& words : {gain, phase, delay}) CHECK(verdict(plan, words).verdict == Verdict::pass);
    CHECK(verdict(reversed, gain).verdict == Verdict::pass);
    const RuleVerdict of_phase = verdict(reversed, phase);
    CHECK(of_phase.verdict == Verdict::fail);
    CHECK(of_phase.figures[0].name == "largest phase off the design");
    CHECK(of_phase.figures[0].unit == "degrees");
    CHECK(verdict(reversed, delay).verdict == Verdict::fail);
}

TEST_CASE("phase: whole samples of latency are not in it", "[judge]") {
    const Plan plan = moving_average_plan(4);
    Case the_case = noise_case(plan, values({{"max_phase_deg", 1.0}, {"max_group_delay_samples", 0.1}}));
    the_case.rules.push_back(rule(plan, "latency", values({{"latency_samples", std::int64_t{3}}})));
    const auto judgement = judge(plan, the_case, delayed(right_response(plan, the_case), 3));
    for (const RuleVerdict& verdict : judgement.rules) CHECK(verdict.verdict == Verdict::pass);
}

TEST_CASE("phase: limits are drawn in panels of their own", "[judge]") {
    const Plan plan = moving_average_plan(4);
    const Case the_case = noise_case(plan, values({{"max_phase_deg", 1.0}, {"max_group_delay_samples", 0.1}}));
    const auto judgement = judge(plan, the_case, right_response(plan, the_case));
    const Plot& plot = judgement.plots.back();
    REQUIRE(plot.panels.size() == 3);
    CHECK(plot.panels[1].quantity == "phase, relative to the design");
    REQUIRE(plot.panels[1].limits.size() == 1);
    CHECK(plot.panels[1].limits[0].max == 1.0);
    CHECK(plot.panels[2].quantity == "group delay, relative to the design");
    CHECK(plot.panels[2].limits.size() >= 16);
    for (const PlotPanel& panel : plot.panels) {
        for (const PlotCurve& curve : panel.curves) CHECK(curve.values.size() == plot.x.size());
    }
}

TEST_CASE("phase: too near a limit for the noise is undecided, and says how long it would take", "[judge]") {
    const Plan plan = moving_average_plan(4);
    const Case the_case = noise_case(plan, values({{"max_phase_deg", 0.5}, {"delta_deg", 0.01}}), 20000);
    auto response = right_response(plan, the_case);
    Gaussian normal(51);
    for (Code& code : response) code += static_cast<Code>(std::lround(1500.0 * normal.next()));
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason.find(" too near a limit to tell from 20000 samples; about ") != std::string::npos);
    CHECK(verdict.reason.find(" would tell, or a wider delta_deg or delta_samples") != std::string::npos);
}

TEST_CASE("phase: intervals of phase and group delay hold as often as they say", "[judge]") {
    const int boards = rounds_of(2000);
    Gaussian normal(77);
    const Plan plan = moving_average_plan(1);
    const Case the_case = noise_case(plan, values({{"max_phase_deg", 1.0}}));
    const JudgedChannel channel{plan, the_case, 1, {}, 0, false};
    PhaseLimits limits;
    limits.max_phase_deg = 1.0;
    limits.max_group_delay_samples = 0.1;
    constexpr std::size_t bins = 41;
    constexpr double delay = 0.07, rate_hz = 1200.0;  // samples: the board's own, pure
    int phase_held = 0, delay_held = 0, wrong_phase = 0, wrong_delay = 0;
    for (int board = 0; board < boards; ++board) {
        ResponseSums sums{{}, BatchSums(bins)};
        sums.smoothing_bins2 = 0.0;
        std::vector<BandPoint> points;
        std::vector<std::complex<double>> own;
        for (std::size_t k = 0; k < bins; ++k) {
            const double f = (static_cast<double>(k) + 1.0) / 100.0;
            sums.cycles_per_sample.push_back(f);
            points.push_back({k, f * rate_hz, 1.0});
            own.push_back(std::polar(1.0, -2.0 * std::numbers::pi * f * delay));
        }
        for (int part = 0; part < 64; ++part) {
            std::vector<std::complex<double>> cross;
            std::vector<double> power;
            for (std::size_t k = 0; k < bins; ++k) {
                const std::complex<double> x(normal.next() * std::sqrt(0.5), normal.next() * std::sqrt(0.5));
                const std::complex<double> noise(normal.next() * 0.05, normal.next() * 0.05);
                cross.push_back(((own[k] - 1.0) * x + noise) * std::conj(x));
                power.push_back(std::norm(x));
            }
            sums.sums.add(cross, power);
            ++sums.averages;
        }
        PhaseLimits at_truth = limits;
        // The true phase of the last point and every delay lie on the limit: a fail is wrong.
        at_truth.max_phase_deg = 360.0 * sums.cycles_per_sample.back() * delay;
        at_truth.max_group_delay_samples = delay;
        PhaseDecisions decisions(at_truth, points, sums, channel);
        const auto steps = decisions.steps(sums, 0.95);
        const auto& step = steps[static_cast<std::size_t>(board) % steps.size()];
        delay_held += step.low <= delay && delay <= step.high;
        const Interval turned = phase_interval(1.0, surest_estimate(sums, bins - 1), 0.95);
        const double truth = std::arg(own[bins - 1]);
        phase_held += turned.low <= truth && truth <= turned.high;
        decisions.look(sums, ErrorShares{1e-2, 1e-2}.alpha_over(decisions.decisions()));
        wrong_phase += decisions.phase_verdict() == Verdict::fail;
        wrong_delay += decisions.verdict() == Verdict::fail && decisions.phase_verdict() != Verdict::fail;
    }
    CHECK(halflsb::testing::holds_95_percent(delay_held, boards));
    CHECK(halflsb::testing::holds_95_percent(phase_held, boards));
    // alpha of all figures together is 1e-2; 2000 boards: 20 in the mean, above 42 with a chance below 1e-5.
    CHECK(wrong_phase + wrong_delay <= std::max(42, boards / 48));
}
