// A slope of the error: both sides of each limit, what rounding may feign of it, and what cannot be judged.
#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/judge/admission.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using halflsb::testing::Gaussian;

namespace {

// At 1200 samples a second; 1.5 LSB over the run are 324 LSB an hour.
constexpr std::int64_t samples = 20000;

Case noise_case(const Plan& plan, const ParameterValues& limits, std::int64_t length = samples) {
    return a_case(plan, "noise", values({{"level_ratio", 0.5}, {"length_samples", length}}),
                  {rule(plan, "drift", limits)});
}

template <class Spoil>
RuleVerdict told(const Plan& plan, const ParameterValues& limits, Spoil spoil) {
    const Case the_case = noise_case(plan, limits);
    REQUIRE(refusals(plan, the_case).empty());
    auto response = right_response(plan, the_case);
    for (std::size_t n = 0; n < response.size(); ++n) response[n] += spoil(n);
    return judge(plan, the_case, response).rules[0];
}

constexpr auto as_it_is = [](std::size_t) { return Code{0}; };
/// A code each 1000 samples: 4320 LSB an hour, 20 LSB over the run.
constexpr auto rising = [](std::size_t n) { return static_cast<Code>(n / 1000); };

}  // namespace

TEST_CASE("drift: a right board does not drift", "[judge]") {
    const Plan plan = moving_average_plan();
    const RuleVerdict verdict =
        told(plan, values({{"max_slope_lsb_per_hour", 400.0}, {"max_change_lsb", 1.6}}), as_it_is);
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(verdict.reference == "declared");
    REQUIRE(verdict.figures.size() == 2);
    CHECK(verdict.figures[0].unit == "LSB per hour");
    CHECK(*verdict.figures[0].value < 20.0);
    CHECK(verdict.figures[0].uncertainty);
    CHECK_THAT(verdict.figures[0].note, Catch::Matchers::Contains("rounding may feign 324"));
    CHECK_THAT(verdict.figures[1].note, Catch::Matchers::Contains("rounding may feign 1.5"));
}

TEST_CASE("drift: a code each thousand samples, on both sides of each limit", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto slope = [&](double limit, auto board) {
        return told(plan, values({{"max_slope_lsb_per_hour", limit}}), board);
    };
    // The bound of 324 keeps what lies nearer undecided, however sure the fit is.
    CHECK(slope(4320.0 + 600.0, rising).verdict == Verdict::pass);
    CHECK(slope(4320.0 - 600.0, rising).verdict == Verdict::fail);
    CHECK(slope(4320.0 + 300.0, rising).verdict == Verdict::undecided);
    CHECK(slope(4320.0 - 300.0, rising).verdict == Verdict::undecided);
    const auto falling = [](std::size_t n) { return -static_cast<Code>(n / 1000); };
    const RuleVerdict down = slope(3000.0, falling);
    CHECK(down.verdict == Verdict::fail);
    CHECK(*down.figures[0].value == Approx(4320.0).epsilon(0.01));
    CHECK_THAT(down.figures[0].note, Catch::Matchers::StartsWith("falling; "));
    CHECK(told(plan, values({{"max_change_lsb", 17.0}}), rising).verdict == Verdict::fail);
    CHECK(told(plan, values({{"max_change_lsb", 23.0}}), rising).verdict == Verdict::pass);
    const RuleVerdict near = told(plan, values({{"max_change_lsb", 20.5}}), rising);
    CHECK(near.verdict == Verdict::undecided);
    CHECK(near.reason == "too near a limit to tell from 20000 samples");
}

TEST_CASE("drift: an undecided slope says how long a run would tell", "[judge]") {
    const Plan plan = moving_average_plan();
    const RuleVerdict near = told(plan, values({{"max_slope_lsb_per_hour", 4320.0 + 200.0}}), rising);
    REQUIRE(near.verdict == Verdict::undecided);
    CHECK_THAT(near.reason, Catch::Matchers::StartsWith("too near a limit to tell from 20000 samples; about "));
    CHECK_THAT(near.reason, Catch::Matchers::EndsWith(" would tell"));
}

TEST_CASE("drift: limits below what rounding may feign, and runs that are too short, are refused", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto refused = [&](const ParameterValues& limits, std::int64_t length = samples) {
        return refusals(plan, noise_case(plan, limits, length));
    };
    CHECK(refused(values({{"max_slope_lsb_per_hour", 324.0}})).empty());
    const auto slope = refused(values({{"max_slope_lsb_per_hour", 100.0}}));
    REQUIRE(slope.size() == 1);
    CHECK(slope[0].position.line == 20);
    CHECK(
        slope[0].problem ==
        "case \"a case\" asks for a slope below 100 LSB per hour, and over 20000 samples rounding alone may feign 324");
    CHECK(slope[0].remedy == "give it at least 64800 samples, or a wider limit");
    CHECK(refused(values({{"max_slope_lsb_per_hour", 100.0}}), 64800).empty());
    CHECK(refused(values({{"max_slope_lsb_per_hour", 0.0}}))[0].remedy == "give a limit above 0");
    CHECK(refused(values({{"max_change_lsb", 1.5}})).empty());
    const auto change = refused(values({{"max_change_lsb", 1.4}}));
    REQUIRE(change.size() == 1);
    CHECK(change[0].problem == "case \"a case\" asks for a change below 1.4 LSB, and rounding alone may feign 1.5 LSB");
    CHECK(change[0].remedy == "give at least 1.5, or max_slope_lsb_per_hour and a longer run");
    CHECK(refused(values({{"max_change_lsb", 2.0}}), 256).empty());
    const auto brief = refused(values({{"max_change_lsb", 2.0}}), 255);
    REQUIRE(brief.size() == 1);
    CHECK(brief[0].problem == "case \"a case\" is too short for a drift: 255 samples are judged, and 256 are needed");
    CHECK(brief[0].remedy == "give it at least 256 samples");
}

TEST_CASE("drift: what is not a number is undecided", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Case the_case = noise_case(plan, values({{"max_change_ratio", 0.1}}));
    auto response = right_response(plan, the_case);
    REQUIRE(judge(plan, the_case, response).rules[0].verdict == Verdict::pass);
    response[300] = 0x7fc00000;
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason == "cannot be judged: an error is NaN or infinite");
}

TEST_CASE("drift: a channel that is not driven can drift too", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.channels = 2;
    Case the_case = noise_case(plan, values({{"max_slope_lsb_per_hour", 400.0}}));
    the_case.channel = 1;
    auto response = right_response(plan, the_case);
    for (std::size_t n = 0; n < response.size() / 2; ++n) response[2 * n + 1] += rising(n);
    const auto judgement = judge(plan, the_case, response);
    REQUIRE(judgement.rules.size() == 2);
    CHECK(judgement.rules[0].verdict == Verdict::pass);
    CHECK(judgement.rules[1].verdict == Verdict::fail);
}

TEST_CASE("drift: a board that drifts by its limit fails with a probability of alpha at most", "[judge]") {
    Plan plan = moving_average_plan(4);
    plan.certainty.alpha = 0.1;
    const std::uint32_t seed = 20261209;
    CAPTURE(seed);
    Gaussian normal(seed);
    const int rounds = rounds_of(400);
    int failed = 0, passed = 0;
    for (int round = 0; round < rounds; ++round) {
        // 400 LSB over the run, and noise of 3000: some 25 LSB of uncertainty at 4096 samples make the 1.5 of rounding
        // small.
        const Case the_case = noise_case(plan, values({{"max_change_lsb", 400.0}}), 4096);
        auto response = right_response(plan, the_case);
        double coloured = 0.0;
        for (std::size_t n = 0; n < response.size(); ++n) {
            coloured = 0.5 * coloured + 1500.0 * normal.next();
            response[n] += static_cast<Code>(std::lround(coloured + 400.0 * static_cast<double>(n) / 4095.0));
        }
        const Verdict verdict = judge(plan, the_case, response).rules[0].verdict;
        failed += verdict == Verdict::fail ? 1 : 0;
        passed += verdict == Verdict::pass ? 1 : 0;
    }
    // Half of alpha is this side's; 20 of 400, with a deviation of 4.4.
    INFO(failed << " failed, " << passed << " passed of " << rounds);
    CHECK(failed <= 0.05 * rounds + 4.0 * std::sqrt(0.05 * 0.95 * rounds));
    CHECK(passed <= 0.001 * rounds + 4.0);
}
