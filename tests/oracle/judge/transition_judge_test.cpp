// The rule transition: both sides of its limits, and what leaves it undecided.
#include "oracle/judge/transition_judge.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "tests/oracle/judge/judging.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using halflsb::testing::Gaussian;

namespace {

Case step_case(const Plan& plan, const ParameterValues& limits, double level = 0.5, std::int64_t length = 600) {
    return a_case(plan, "step",
                  values({{"level_ratio", level}, {"at_samples", std::int64_t{64}}, {"length_samples", length}}),
                  {rule(plan, "transition", limits)});
}

RuleVerdict verdict_on(const Plan& plan, const Case& the_case, const std::vector<Code>& response,
                       std::size_t block = 256) {
    const CaseJudgement judgement = judge(plan, the_case, response, block);
    REQUIRE(judgement.rules.size() == 1);
    return judgement.rules.front();
}

/// Damping 0.4, 40 samples a period: 25 % of overshoot.
Plan ringing_plan() {
    Plan plan = moving_average_plan();
    const double r = std::exp(-0.4 * 2.0 * 3.14159265358979 / 40.0),
                 w = std::sqrt(1.0 - 0.16) * 2.0 * 3.14159265358979 / 40.0;
    const double a1 = -2.0 * r * std::cos(w), a2 = r * r;
    plan.filter[0].design = BiquadCascade{{{1.0 + a1 + a2, 0.0, 0.0, a1, a2}}};
    return plan;
}

const std::vector<std::string> all_words{"max_rise_samples",     "max_overshoot_percent", "max_undershoot_percent",
                                         "max_preshoot_percent", "max_settling_samples",  "final_lsb"};

ParameterValues limits_of(const std::vector<double>& numbers) {
    ParameterValues given;
    for (std::size_t i = 0; i < all_words.size(); ++i) given.set(all_words[i], numbers[i]);
    return given;
}

}  // namespace

TEST_CASE("transition rule: a right board passes, and each limit has two sides", "[judge]") {
    const Plan plan = ringing_plan();
    const std::vector<double> easy{30.0, 40.0, 20.0, 1.0, 200.0, 4.0};
    const Case the_case = step_case(plan, limits_of(easy));
    auto response = right_response(plan, the_case);
    for (const double off : {0.0, 3.0}) {
        // A level that is off, so that the final value has a size.
        for (std::size_t n = 64; n < response.size(); ++n) response[n] += static_cast<Code>(off);
        const RuleVerdict passed = verdict_on(plan, the_case, response);
        INFO(passed.reason);
        CHECK(passed.verdict == Verdict::pass);
        CHECK(passed.reference == "design");
        REQUIRE(passed.figures.size() == 6);
        for (std::size_t i = 0; i < 6; ++i) {
            const JudgedFigure& figure = passed.figures[i];
            INFO(figure.name);
            REQUIRE(figure.value);
            REQUIRE(figure.uncertainty);
            CHECK(figure.margin);
            // No noise: the uncertainty is the bound of the codes over sqrt 3, and that of the mean of equal codes is
            // 0.
            const double bound = *figure.uncertainty * std::sqrt(3.0);
            for (const bool beyond : {false, true}) {
                std::vector<double> limits = easy;
                limits[i] = *figure.value + (beyond ? -1.001 : 1.001) * bound + (beyond ? -1e-6 : 1e-6);
                if (limits[i] < 0.0) continue;
                const RuleVerdict verdict = verdict_on(plan, step_case(plan, limits_of(limits)), response);
                CHECK(verdict.figures[i].verdict == (beyond ? Verdict::fail : Verdict::pass));
            }
        }
        CHECK(passed.figures[1].value == Approx(25.4).margin(0.3));
        CHECK(passed.figures[5].value == off);
        CHECK(*verdict_on(plan, the_case, response, 7).figures[4].value == *passed.figures[4].value);
    }
}

TEST_CASE("transition rule: a moving average rises in 0.8 of its points, and falls so", "[judge]") {
    const Plan plan = moving_average_plan();
    for (const double level : {0.5, -0.5}) {
        const std::string word = level > 0.0 ? "max_rise_samples" : "max_fall_samples";
        const Case the_case = step_case(plan, values({{word, 12.9}, {"max_overshoot_percent", 0.02}}), level);
        const RuleVerdict verdict = verdict_on(plan, the_case, right_response(plan, the_case));
        CHECK(verdict.verdict == Verdict::pass);
        CHECK(verdict.figures[0].name == (level > 0.0 ? "rise" : "fall"));
        CHECK(*verdict.figures[0].value == Approx(12.8).margin(0.01));
    }
}

TEST_CASE("transition rule: what never settles has failed its limit", "[judge]") {
    const Plan plan = moving_average_plan();
    const Case the_case = step_case(plan, values({{"max_settling_samples", 100.0}}));
    const auto right = right_response(plan, the_case);
    auto swinging = right;
    for (std::size_t n = 300; n < swinging.size(); ++n) swinging[n] += n % 2 == 0 ? 600 : -600;
    const RuleVerdict verdict = verdict_on(plan, the_case, swinging);
    CHECK(verdict.verdict == Verdict::fail);
    // 600 of 16384 are 3.7 %: the last one out is the last of all, 599 - 64 - the mid instant of 7 samples.
    CHECK(*verdict.figures[0].value == Approx(599.0 - 64.0 - 7.0).margin(1.0));
    CHECK(verdict.figures[0].note == "or more: outside the band in the final stretch");
    // Within the limit at its last time outside, nobody knows.
    const Case patient = step_case(plan, values({{"max_settling_samples", 1000.0}}));
    const RuleVerdict open = verdict_on(plan, patient, swinging);
    CHECK(open.verdict == Verdict::undecided);
    CHECK(open.reason ==
          "the settling cannot be judged: the record ends before the response has settled; a rule of kind \"error\" "
          "shows "
          "what came back");
}

TEST_CASE("transition rule: what cannot be measured is undecided, never failed", "[judge]") {
    const Plan plan = moving_average_plan();
    const Case the_case = step_case(plan, values({{"max_rise_samples", 13.0}, {"max_settling_samples", 20.0}}));
    const auto right = right_response(plan, the_case);
    const RuleVerdict dead = verdict_on(plan, the_case, std::vector<Code>(right.size(), 0));
    CHECK(dead.verdict == Verdict::undecided);
    CHECK(dead.reason ==
          "the rise cannot be judged: the response never reaches the reference level; a rule of kind \"error\" shows "
          "what "
          "came back");
    auto clipped = right;
    clipped[300] = 32767;
    CHECK(verdict_on(plan, the_case, clipped).verdict == Verdict::undecided);
    CHECK(verdict_on(plan, the_case, clipped).reason.starts_with("1 sample stands at the end of the output's range"));
    // Near the limit: 12.8 to 0.02 or so.
    const RuleVerdict near = verdict_on(plan, step_case(plan, values({{"max_rise_samples", 12.8}})), right);
    CHECK(near.verdict == Verdict::undecided);
    CHECK(
        near.reason ==
        "the rise is too near its limit to tell with these codes and this noise; give the step a higher level, or the "
        "limit more room");
    // Cut off while it swings: nobody knows what would have come.
    auto cut = right;
    cut.resize(80);
    CHECK(verdict_on(plan, the_case, cut).reason == "the transition cannot be judged: too few samples");
    Plan floats = plan;
    floats.signal.input = floats.signal.output = *sample_format("f32");
    const Case of_floats = step_case(floats, values({{"max_rise_samples", 13.0}}));
    auto response = right_response(floats, of_floats);
    CHECK(verdict_on(floats, of_floats, response).verdict == Verdict::pass);
    response[300] = 0x7fc00000;
    CHECK(verdict_on(floats, of_floats, response).verdict == Verdict::undecided);
    CHECK(verdict_on(floats, of_floats, response).reason ==
          "the transition cannot be judged: a sample is NaN or infinite");
}

TEST_CASE("transition rule: a board that is late is judged where its response lies", "[judge]") {
    const Plan plan = moving_average_plan();
    Case the_case = step_case(plan, values({{"max_rise_samples", 13.0}, {"final_lsb", 1.0}}));
    the_case.rules.push_back(implicit_latency());
    const CaseJudgement judgement = judge(plan, the_case, delayed(right_response(plan, the_case), 5));
    CHECK(judgement.rules[0].verdict == Verdict::pass);
    CHECK(judgement.rules[0].reason == "judged at the measured lag of 5 samples");
    CHECK(judgement.rules[1].verdict == Verdict::fail);
}

TEST_CASE("transition rule: a square is judged at its first edge, a chain that decimates at its own rate", "[judge]") {
    Plan plan = moving_average_plan();
    const Case square =
        a_case(plan, "square", values({{"period_samples", std::int64_t{400}}, {"length_samples", std::int64_t{1000}}}),
               {rule(plan, "transition", values({{"max_fall_samples", 13.0}, {"final_lsb", 1.0}}))});
    const auto change = first_level_change(plan, square);
    REQUIRE(change);
    CHECK(change->at == 200);
    CHECK(change->end == 400);
    const auto step = step_window(plan, square, 1, *change);
    REQUIRE(step);
    CHECK(step->window.begin == 15);
    CHECK(step->window.end == 400);
    CHECK(step->levels.first == 0.5);
    CHECK(step->levels.second == -0.5);
    CHECK(verdict_on(plan, square, right_response(plan, square)).verdict == Verdict::pass);

    FilterStage stage;
    stage.design = FirDecimator{std::vector<double>(64, 1.0 / 64.0), 4};
    plan.filter = {stage};
    const Case decimated =
        step_case(plan, values({{"max_rise_samples", 13.0}, {"max_settling_samples", 9.0}}), 0.5, 1024);
    const RuleVerdict verdict = verdict_on(plan, decimated, right_response(plan, decimated));
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(*verdict.figures[0].value == Approx(12.8).margin(0.05));
}

TEST_CASE("transition rule: a median has the levels of its input", "[judge]") {
    Plan plan = moving_average_plan();
    FilterStage median;
    median.design = Median{5};
    plan.filter.push_back(median);
    CHECK(gain_of_constant(plan.filter) == Approx(1.0));
    const Case the_case = step_case(plan, values({{"max_rise_samples", 13.0}, {"final_lsb", 1.0}}));
    CHECK(verdict_on(plan, the_case, right_response(plan, the_case)).verdict == Verdict::pass);
}

TEST_CASE("transition rule: right boards with noise fail as seldom as alpha says", "[judge]") {
    Plan plan = ringing_plan();
    plan.certainty.alpha = 0.06;
    const Case easy = step_case(plan, limits_of({30.0, 40.0, 20.0, 1.0, 200.0, 4.0}), 0.5, 2000);
    const auto right = right_response(plan, easy);
    const RuleVerdict without = verdict_on(plan, easy, right);
    std::vector<double> limits;  // what a right board without noise has, its codes' bound beyond
    for (const JudgedFigure& figure : without.figures)
        limits.push_back(*figure.value + std::sqrt(3.0) * *figure.uncertainty + 1e-3);
    const Case the_case = step_case(plan, limits_of(limits), 0.5, 2000);
    const std::uint64_t seed = 20261204;
    INFO("seed " << seed);
    Gaussian normal(seed);
    const int rounds = rounds_of(1000);
    std::vector<int> fails(limits.size());
    for (int round = 0; round < rounds; ++round) {
        auto response = right;
        for (Code& code : response) code += static_cast<Code>(std::lround(20.0 * normal.next()));
        const RuleVerdict verdict = verdict_on(plan, the_case, response, 2000);
        for (std::size_t i = 0; i < limits.size(); ++i) fails[i] += verdict.figures[i].verdict == Verdict::fail;
    }
    // Each has a sixth of alpha; no more than 4 deviations of the binomial above that.
    const double share = 0.01, most = rounds * share + 4.0 * std::sqrt(rounds * share);
    for (std::size_t i = 0; i < limits.size(); ++i) {
        INFO(without.figures[i].name << ' ' << fails[i] << " of " << rounds);
        CHECK(fails[i] <= most);
    }
}
