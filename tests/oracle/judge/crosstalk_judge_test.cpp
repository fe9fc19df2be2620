// The rule crosstalk: what an idle channel returns while another one is driven.
#include "oracle/judge/crosstalk_judge.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/judge/admission.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/oracle/support.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

/// Left and right load cell, the right one with another mean behind.
Plan two_cells(bool alike = true) {
    Plan plan = test::moving_average_plan();
    plan.signal.channels = 2;
    if (alike) return plan;
    FilterStage right;
    right.design = MovingAverage{8};
    right.channels = {2};
    plan.filter.push_back(right);
    return plan;
}

Case left_alone(const Plan& plan, const ParameterValues& limits, std::int64_t length = 6000,
                const std::string& shape = "noise") {
    Case made = test::a_case(plan, shape, values({{"level_ratio", 0.5}, {"length_samples", length}}),
                             {test::rule(plan, "crosstalk", limits), test::implicit_latency()});
    made.channel = 1;
    return made;
}

/// Adds to channel 2 what comes of `source`, a code an instant.
template <class Source>
void leak(std::vector<Code>& response, Source source) {
    for (std::size_t n = 0; 2 * n + 1 < response.size(); ++n)
        response[2 * n + 1] += static_cast<Code>(std::lround(source(n)));
}

std::vector<Code> sent_left(const Plan& plan, const Case& the_case) {
    std::vector<Code> codes(static_cast<std::size_t>(the_case.stimulus->length_samples()));
    fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, 0, codes);
    return codes;
}

RuleVerdict crosstalk_of(const CaseJudgement& judgement) {
    REQUIRE(judgement.rules.size() == 2);  // of the idle channel alone, and the latency of the other
    CHECK(judgement.rules[0].channel == 2);
    return judgement.rules[0];
}

}  // namespace

TEST_CASE("crosstalk: channels that are apart pass, whatever the limit", "[judge]") {
    for (const bool alike : {true, false}) {
        const Plan plan = two_cells(alike);
        const Case the_case = left_alone(plan, values({{"max_lsb", 0.0}, {"max_db", -200.0}}));
        CHECK(refusals(plan, the_case).empty());
        const RuleVerdict verdict = crosstalk_of(judge(plan, the_case, test::right_response(plan, the_case)));
        CHECK(verdict.verdict == Verdict::pass);
        CHECK(verdict.reason == "nothing comes through: every sample is as silent as the reference");
        CHECK(verdict.figures.at(0).value == 0.0);
        CHECK(verdict.figures.at(1).note == "the response does not vary");
    }
}

TEST_CASE("crosstalk: the largest, both sides of the limit", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = left_alone(plan, values({{"max_lsb", 3.0}}));
    for (const Code size : {3, -3, 4, -4}) {
        auto response = test::right_response(plan, the_case);
        response[2 * 777 + 1] += size;
        const RuleVerdict verdict = crosstalk_of(judge(plan, the_case, response));
        INFO(size);
        CHECK((verdict.verdict == Verdict::pass) == (std::abs(size) <= 3));
        CHECK(verdict.figures.at(0).value == std::abs(size));
        CHECK(verdict.first_bad.has_value() == (std::abs(size) > 3));
        if (verdict.first_bad) CHECK(verdict.first_bad->index == 777);
    }
}

TEST_CASE("crosstalk: derived is what the arithmetic may leave of zeros", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = left_alone(plan, values({{"max_lsb", std::string("derived")}}));
    CHECK(refusals(plan, the_case).empty());
    auto response = test::right_response(plan, the_case);
    CHECK(crosstalk_of(judge(plan, the_case, response)).verdict == Verdict::pass);
    response[2 * 50 + 1] += 2;
    CHECK(crosstalk_of(judge(plan, the_case, response)).verdict == Verdict::fail);
}

TEST_CASE("crosstalk: a coupling, both sides of the limit, and where it comes from", "[judge]") {
    const Plan plan = two_cells(false);
    for (const double limit_db : {-42.0, -42.3}) {
        const Case the_case = left_alone(plan, values({{"max_db", limit_db}}), 20000);
        const auto sent = sent_left(plan, the_case);
        const auto right = test::right_response(plan, the_case);
        auto response = right;
        // A 128th of what was sent, 3 samples late: -42.144 dB.
        leak(response, [&](std::size_t n) { return n < 3 ? 0.0 : sent[n - 3] / 128.0; });
        const RuleVerdict verdict = crosstalk_of(judge(plan, the_case, response));
        CHECK(*verdict.figures.at(0).value == Approx(-42.144).margin(0.01));
        CHECK(verdict.verdict == (limit_db == -42.0 ? Verdict::pass : Verdict::fail));
        if (verdict.verdict == Verdict::fail)
            CHECK(verdict.reason == "what comes through is what channel 1 was sent, not filtered, 3 samples late");
        response = right;
        leak(response, [&](std::size_t n) { return right[2 * n] / 128.0; });
        const RuleVerdict through = crosstalk_of(judge(plan, the_case, response));
        CHECK(*through.figures.at(0).value == Approx(-42.144).margin(0.1));
        if (through.verdict == Verdict::fail) CHECK(through.reason == "what comes through is what channel 1 returns");
    }
}

TEST_CASE("crosstalk: the blocks change nothing", "[judge]") {
    const Plan plan = two_cells(false);
    const Case the_case = left_alone(plan, values({{"max_db", -60.0}}));
    const auto sent = sent_left(plan, the_case);
    auto response = test::right_response(plan, the_case);
    leak(response, [&](std::size_t n) { return sent[n] / 100.0; });
    const RuleVerdict whole = crosstalk_of(judge(plan, the_case, response, 6000));
    for (const std::size_t block : {1u, 7u, 1000u}) {
        const RuleVerdict verdict = crosstalk_of(judge(plan, the_case, response, block));
        CHECK(verdict.figures.at(0).value == whole.figures.at(0).value);
        CHECK(verdict.figures.at(0).uncertainty == whole.figures.at(0).uncertainty);
    }
}

TEST_CASE("crosstalk: a board that is late as the plan says has its coupling where it is", "[judge]") {
    const Plan plan = two_cells();
    Case the_case = left_alone(plan, values({{"max_db", -60.0}}));
    the_case.rules[1] = test::rule(plan, "latency", values({{"latency_samples", std::int64_t{5}}}));
    const auto sent = sent_left(plan, the_case);
    auto response = test::delayed(test::right_response(plan, the_case), 5, 2);
    leak(response, [&](std::size_t n) { return n < 5 ? 0.0 : sent[n - 5] / 64.0; });
    const RuleVerdict verdict = crosstalk_of(judge(plan, the_case, response));
    CHECK(*verdict.figures.at(0).value == Approx(20.0 * std::log10(1.0 / 64.0)).margin(0.05));
    CHECK(verdict.reason == "what comes through is what channel 1 was sent, not filtered, 5 samples late");
}

TEST_CASE("crosstalk: only a coupling takes a share of alpha", "[judge]") {
    const Plan plan = two_cells();
    CHECK(is_uncertain(test::rule(plan, "crosstalk", values({{"max_db", -60.0}}))));
    CHECK_FALSE(is_uncertain(test::rule(plan, "crosstalk", values({{"max_lsb", 1.0}}))));
}

TEST_CASE("crosstalk: noise of its own does not fail a channel", "[judge]") {
    const std::uint64_t seed = 31;
    INFO("seed " << seed);
    testing::Random random(seed);
    // A chance of 1e-3 for all of a hundred: that one fails is one in a thousand.
    Plan plan = two_cells();
    plan.certainty.alpha = 1e-5;
    const Case the_case = left_alone(plan, values({{"max_db", -90.0}}), 4096);
    plan.cases.push_back(the_case);
    const auto right = test::right_response(plan, the_case);
    int fails = 0;
    const auto rounds = static_cast<int>(test::rounds_of(100));
    for (int round = 0; round < rounds; ++round) {
        auto response = right;
        leak(response, [&](std::size_t) { return random.between(-40.0, 40.0); });
        if (crosstalk_of(judge(plan, the_case, response)).verdict == Verdict::fail) ++fails;
    }
    CHECK(fails == 0);
}

TEST_CASE("crosstalk: what cannot tell it is refused, naming what can", "[judge]") {
    const auto both = values({{"max_lsb", 1.0}, {"max_db", -60.0}});
    const auto refused = [](const Plan& plan, const Case& the_case) {
        const auto found = refusals(plan, the_case);
        REQUIRE(found.size() == 1);
        CHECK(found[0].position.line == 20);
        return found[0].problem + "; " + found[0].remedy;
    };
    const Plan plan = two_cells();
    Case all = left_alone(plan, both);
    all.channel.reset();
    CHECK(refused(plan, all) ==
          "case \"a case\" drives all channels, so none is left to listen on; drive one alone: channel = 1 in its "
          "[case.stimulus], and a case for each of the others");
    CHECK(refused(plan, left_alone(plan, both, 2047)) ==
          "case \"a case\" is too short for a coupling: 2047 samples are judged, and 2048 are needed; give it at least "
          "2048 samples");
    CHECK(refusals(plan, left_alone(plan, both, 2048)).empty());
    CHECK(refused(plan, left_alone(plan, both, 6000, "impulse")) ==
          "the stimulus of case \"a case\" (shape = \"impulse\") has its power in a part of the case, so nothing says "
          "how sure a coupling is; use shape = \"noise\"");
    CHECK(refusals(plan, left_alone(plan, values({{"max_lsb", 1.0}}), 6000, "impulse")).empty());
    const Plan one = test::moving_average_plan();
    CHECK(refused(one, left_alone(one, both)) ==
          "crosstalk is between channels, and the signal has one; say channels = 2 or more in [signal], or leave the "
          "rule out");
}
