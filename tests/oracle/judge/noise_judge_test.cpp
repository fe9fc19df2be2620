// How much noise comes through and how much the board adds: both sides of each limit, and what cannot be judged.
#include "oracle/judge/noise_judge.hpp"

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

ParameterValues noise(std::int64_t length, std::int64_t seed = 1) {
    return values({{"level_ratio", 0.5}, {"length_samples", length}, {"seed", seed}});
}

Case noise_case(const Plan& plan, const ParameterValues& limits, std::int64_t length = 20000, std::int64_t seed = 1) {
    return a_case(plan, "noise", noise(length, seed), {rule(plan, "noise", limits)});
}

/// Of a board that returns what `spoil` makes of a right response.
template <class Spoil>
RuleVerdict told(const Plan& plan, const ParameterValues& limits, Spoil spoil) {
    const Case the_case = noise_case(plan, limits);
    REQUIRE(refusals(plan, the_case).empty());
    auto response = right_response(plan, the_case);
    for (Code& code : response) code = spoil(code);
    return judge(plan, the_case, response).rules[0];
}

constexpr auto as_it_is = [](Code code) { return code; };
constexpr auto halved = [](Code code) { return code / 2; };

}  // namespace

TEST_CASE("noise: a moving average of 16 points has a gain of 1/16, -12.04 dB", "[judge]") {
    const Plan plan = moving_average_plan();
    const RuleVerdict verdict =
        told(plan, values({{"min_gain_db", -12.1}, {"max_gain_db", -12.0}, {"max_excess_lsb", 0.3}}), as_it_is);
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(verdict.reference == "design");
    REQUIRE(verdict.figures.size() == 3);
    CHECK(*verdict.figures[0].value == Approx(-12.0412).margin(1e-4));
    CHECK(verdict.figures[0].note == "design: -12.04 dB");
    CHECK(verdict.figures[0].uncertainty);
    // One rounding of sixteenths: (1 - 1/256) / 12.
    CHECK(*verdict.figures[2].value == Approx(std::sqrt((1.0 - 1.0 / 256.0) / 12.0)).epsilon(0.02));
    CHECK(verdict.figures[2].unit == "LSB");
    const RuleVerdict ratio = told(plan, values({{"min_gain", 0.062}, {"max_gain", 0.063}}), as_it_is);
    CHECK(ratio.verdict == Verdict::pass);
    CHECK(*ratio.figures[0].value == Approx(0.0625).epsilon(1e-4));
    CHECK(ratio.figures[0].unit.empty());
}

TEST_CASE("noise: both sides of a gain, absolute and over the design's", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto db = [&](const char* word, double limit, auto board, bool relative = false) {
        auto limits = values({{word, limit}});
        if (relative) limits.set("relative_to", std::string("design"));
        return told(plan, limits, board).verdict;
    };
    CHECK(db("max_gain_db", -12.2, as_it_is) == Verdict::fail);
    CHECK(db("max_gain_db", -12.04, as_it_is) == Verdict::pass);
    CHECK(db("min_gain_db", -11.9, as_it_is) == Verdict::fail);
    CHECK(db("min_gain_db", -12.1, halved) == Verdict::fail);
    CHECK(db("min_gain_db", -18.1, halved) == Verdict::pass);
    CHECK(db("max_gain_db", -17.9, halved) == Verdict::pass);
    CHECK(db("max_gain_db", -6.0, halved, true) == Verdict::pass);
    CHECK(db("min_gain_db", -6.1, halved, true) == Verdict::pass);
    CHECK(db("min_gain_db", -5.9, halved, true) == Verdict::fail);
    CHECK(db("min_gain_db", -0.01, as_it_is, true) == Verdict::pass);
    CHECK(db("max_gain", 0.061, as_it_is) == Verdict::fail);
    CHECK(db("min_gain", 0.0624, as_it_is) == Verdict::pass);
    CHECK(db("min_gain", 0.0645, as_it_is) == Verdict::fail);
    CHECK(db("max_gain", 1.0, halved, true) == Verdict::pass);
}

TEST_CASE("noise: what the board adds is told, whatever it lets through", "[judge]") {
    const Plan plan = moving_average_plan();
    Gaussian normal(7);
    const auto noisy = [&](Code code) { return code + static_cast<Code>(std::lround(5.0 * normal.next())); };
    // sqrt(25 + 1/12 + 1/12) = 5.02 LSB.
    const RuleVerdict verdict = told(plan, values({{"max_excess_lsb", 4.5}}), noisy);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(*verdict.figures[0].value == Approx(5.02).epsilon(0.02));
    CHECK(told(plan, values({{"max_excess_lsb", 5.6}}), noisy).verdict == Verdict::pass);
    CHECK(told(plan, values({{"max_gain_db", -12.0}}), noisy).verdict == Verdict::pass);
    // An offset is no noise.
    CHECK(told(plan, values({{"max_excess_lsb", 0.3}}), [](Code code) { return code + 100; }).verdict == Verdict::pass);
}

TEST_CASE("noise: a board that returns nothing has no gain to speak of", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto silent = [](Code) { return Code{5}; };
    const RuleVerdict verdict = told(plan, values({{"min_gain_db", -100.0}}), silent);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK_FALSE(verdict.figures[0].value);
    CHECK(verdict.figures[0].note == "the response does not vary");
    CHECK(told(plan, values({{"max_gain_db", -100.0}}), silent).verdict == Verdict::pass);
    CHECK(told(plan, values({{"min_gain", 0.01}}), silent).verdict == Verdict::fail);
}

TEST_CASE("noise: what clips, is no number or lies too near a limit is undecided", "[judge]") {
    const Plan plan = moving_average_plan();
    const Case the_case = noise_case(plan, values({{"max_gain_db", -11.0}}));
    auto response = right_response(plan, the_case);
    response[700] = 32767;
    const RuleVerdict clipped = judge(plan, the_case, response).rules[0];
    CHECK(clipped.verdict == Verdict::undecided);
    CHECK_THAT(clipped.reason, Catch::Matchers::StartsWith("1 sample stands at the end of the output's range"));

    Plan floats = plan;
    floats.signal.input = floats.signal.output = *sample_format("f32");
    const Case of_floats = noise_case(floats, values({{"max_gain_db", -11.0}}));
    auto numbers = right_response(floats, of_floats);
    REQUIRE(judge(floats, of_floats, numbers).rules[0].verdict == Verdict::pass);
    numbers[700] = 0x7fc00000;
    const RuleVerdict not_a_number = judge(floats, of_floats, numbers).rules[0];
    CHECK(not_a_number.verdict == Verdict::undecided);
    CHECK(not_a_number.reason == "cannot be judged: a sample is NaN or infinite, or too large to be squared");

    Gaussian normal(3);
    const RuleVerdict near = told(plan, values({{"max_excess_lsb", 100.0}, {"delta_db", 0.001}}), [&](Code code) {
        return code + static_cast<Code>(std::lround(100.0 * normal.next()));
    });
    CHECK(near.verdict == Verdict::undecided);
    CHECK_THAT(near.reason, Catch::Matchers::StartsWith("too near a limit to tell from 19985 samples"));
}

TEST_CASE("noise: a stimulus that is not white, or too short, is refused with what would do", "[judge]") {
    const Plan plan = moving_average_plan();
    const Rule asked = rule(plan, "noise", values({{"max_gain_db", -12.0}}));
    const auto sine = refusals(
        plan, a_case(plan, "sine", values({{"frequency_hz", 50.0}, {"length_samples", std::int64_t{20000}}}), {asked}));
    REQUIRE(sine.size() == 1);
    CHECK(sine[0].position.line == 20);
    CHECK(sine[0].problem ==
          "case \"a case\" cannot answer a noise rule with shape = \"sine\": the gain is that of white noise");
    CHECK(sine[0].remedy == "use shape = \"noise\"");
    CHECK(refusals(plan, noise_case(plan, values({{"max_gain_db", -12.0}}), 3215)).empty());
    const auto brief = refusals(plan, noise_case(plan, values({{"max_gain_db", -12.0}}), 3214));
    REQUIRE(brief.size() == 1);
    CHECK(brief[0].problem ==
          "case \"a case\" is too short for a noise power: 3199 samples are left once the filter has settled, and 3200 "
          "are needed");
    CHECK(brief[0].remedy == "give it at least 3215 samples");
}

TEST_CASE("noise: a filter that has no gain on paper is held against its stimulus", "[judge]") {
    Plan plan = moving_average_plan();
    plan.filter[0].design = Median{5};
    const Case the_case = noise_case(plan, values({{"min_gain_db", -4.5}, {"max_gain_db", -3.0}}));
    REQUIRE(refusals(plan, the_case).empty());
    CHECK_FALSE(white_noise_gain(plan, the_case, 1));
    const RuleVerdict verdict = judge(plan, the_case, right_response(plan, the_case)).rules[0];
    // The middle of 5 uniform values is beta(3, 3): a variance of 1/28 where one value has 1/12.
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(*verdict.figures[0].value == Approx(10.0 * std::log10(12.0 / 28.0)).margin(0.2));
}

TEST_CASE("noise: where the rate changes, the power is that of what was sent", "[judge]") {
    for (const bool interpolates : {false, true}) {
        Plan plan = moving_average_plan();
        const std::vector<double> taps{0.25, 0.5, 0.25};
        if (interpolates) {
            plan.filter[0].design = FirInterpolator{{taps}, 2};
        } else {
            plan.filter[0].design = FirDecimator{{taps}, 2, 0};
        }
        const Case the_case = noise_case(plan, values({{"max_gain_db", 0.0}}));
        REQUIRE(refusals(plan, the_case).empty());
        const RuleVerdict verdict = judge(plan, the_case, right_response(plan, the_case)).rules[0];
        CHECK(verdict.verdict == Verdict::pass);
        // Decimator: sum h^2 = 3/8. Interpolator: its outputs see 1/2, and 1/4 and 1/4, in turn: mean 3/16.
        CHECK(*verdict.figures[0].value ==
              Approx(10.0 * std::log10(interpolates ? 3.0 / 16.0 : 3.0 / 8.0)).margin(0.3));
    }
}

TEST_CASE("noise: a channel that is not driven says nothing", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.channels = 2;
    Case the_case = noise_case(plan, values({{"max_gain_db", -12.0}}));
    the_case.channel = 2;
    const auto judgement = judge(plan, the_case, right_response(plan, the_case));
    REQUIRE(judgement.rules.size() == 1);
    CHECK(judgement.rules[0].channel == 2);
}

TEST_CASE("noise: a board on its limit fails with a probability of alpha at most", "[judge]") {
    // The true power is sum h^2 + s^2 / P_x of a board that adds normal noise of s, P_x = (1/2)^2 / 3: alpha is the
    // chance of a fail there. It is a bound, not an equation: a relative uncertainty that goes with the estimate itself
    // makes it less.
    Plan plan = moving_average_plan(4);
    plan.certainty.alpha = 0.05;
    constexpr double s = 0.02;
    const double limit = 0.25 + s * s / (0.25 / 3.0);
    const std::uint32_t seed = 20261208;
    CAPTURE(seed);
    Gaussian normal(seed);
    const int rounds = rounds_of(400);
    int high = 0, low = 0;
    for (int round = 0; round < rounds; ++round) {
        for (const bool at_least : {false, true}) {
            const Case the_case =
                noise_case(plan, values({{at_least ? "min_gain" : "max_gain", limit}}), 2000, 1000 + round);
            auto response = right_response(plan, the_case);
            for (Code& code : response) code += static_cast<Code>(std::lround(32768.0 * s * normal.next()));
            const Verdict verdict = judge(plan, the_case, response).rules[0].verdict;
            (at_least ? low : high) += verdict == Verdict::fail ? 1 : 0;
        }
    }
    // 5 % of 400 is 20, with a deviation of 4.4: four of these above it.
    INFO(high << " and " << low << " of " << rounds);
    CHECK(high <= 0.05 * rounds + 4.0 * std::sqrt(0.05 * 0.95 * rounds));
    CHECK(low <= 0.05 * rounds + 4.0 * std::sqrt(0.05 * 0.95 * rounds));
}
