// What remains once the stimulus has ended: both sides of a limit, which kind it is, and what cannot be judged.
#include <catch2/catch.hpp>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/judge/admission.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/silence_span.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using testing::Random;

namespace {

const auto derived = values({{"max_lsb", std::string("derived")}});

ParameterValues impulse(std::int64_t at, std::int64_t length) {
    return values({{"level_ratio", 0.5}, {"at_samples", at}, {"length_samples", length}});
}

/// A sample at 20; a moving average of 16 points has sent all of it back by sample 35.
Case impulse_case(const Plan& plan, const ParameterValues& limit, std::int64_t length = 400) {
    return a_case(plan, "impulse", impulse(20, length), {rule(plan, "silence", limit)});
}

constexpr std::size_t first_judged = 36;

RuleVerdict verdict_of(const Plan& plan, const Case& the_case, const std::vector<Code>& response,
                       std::size_t block = 256) {
    const auto judgement = judge(plan, the_case, response, block);
    for (const RuleVerdict& verdict : judgement.rules) {
        if (std::holds_alternative<SilenceRule>(verdict.rule.kind)) return verdict;
    }
    FAIL("no silence rule");
    return {};
}

/// y = y + (x - y) / 8, rounded once.
Plan one_pole_plan(Rounding rounding) {
    Plan plan = moving_average_plan();
    plan.filter[0].design = BiquadCascade{{{0.125, 0.0, 0.0, -0.875, 0.0}}};
    plan.filter[0].kind = "biquad-cascade";
    plan.filter[0].coefficient_fraction_bits = 3;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 3;
    plan.filter[0].arithmetic.rounding = rounding;
    return plan;
}

std::vector<Code> twin_response(const Plan& plan, const Case& the_case) {
    std::vector<Code> codes(static_cast<std::size_t>(the_case.stimulus->length_samples()));
    fill_case_codes(plan, the_case, 0, codes);
    auto twin = make_twin(*described_channel(plan, the_case, 1));
    REQUIRE(twin);
    std::vector<Code> response(codes.size());
    twin->process(codes, response);
    return response;
}

}  // namespace

TEST_CASE("silence: nothing remains of a right moving average behind its tail", "[judge]") {
    const Plan plan = moving_average_plan();
    const Case the_case = impulse_case(plan, values({{"max_lsb", 0.0}}));
    const RuleVerdict verdict = verdict_of(plan, the_case, right_response(plan, the_case));
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(verdict.reason == "nothing remains from sample 36 on");
    REQUIRE(verdict.figures.size() == 1);
    CHECK(verdict.figures[0].value == 0.0);
    CHECK_FALSE(verdict.figures[0].uncertainty);
}

TEST_CASE("silence: a stuck value, a cycle, neither, and what falls silent late are told apart", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto told = [&](double max_lsb, auto spoil, std::size_t block = 256) {
        const Case the_case = impulse_case(plan, values({{"max_lsb", max_lsb}}));
        auto response = right_response(plan, the_case);
        for (std::size_t n = first_judged; n < response.size(); ++n) response[n] += spoil(n);
        return verdict_of(plan, the_case, response, block);
    };
    const auto stuck = [](std::size_t) { return Code{-3}; };
    CHECK(told(3.0, stuck).verdict == Verdict::pass);
    const RuleVerdict failed = told(2.0, stuck);
    CHECK(failed.verdict == Verdict::fail);
    CHECK(failed.figures[0].value == 3.0);
    CHECK(failed.figures[0].margin == -1.0);
    CHECK(failed.figures[0].note == "stands at -3 LSB");
    CHECK(failed.reason == "364 of 364 samples from 36 on beyond max");
    REQUIRE(failed.first_bad);
    CHECK(failed.first_bad->index == 36);
    const auto cycle = [](std::size_t n) { return std::vector<Code>{0, 1, 2, 0, -1, -2, 1}[n % 7]; };
    for (const std::size_t block : {std::size_t{1}, std::size_t{13}, std::size_t{400}})
        CHECK(told(1.0, cycle, block).figures[0].note == "repeats every 7 samples");
    const auto any = [](std::size_t n) { return static_cast<Code>(n * 7919 % 20011 % 5); };
    CHECK(told(1.0, any).figures[0].note == "neither stands nor repeats");
    const auto late = [](std::size_t n) { return Code{n <= 100 ? 1 : 0}; };
    CHECK(told(0.0, late).figures[0].note == "silent after sample 100");
}

TEST_CASE("silence: the tail is not judged, the sample behind it is, wherever the response lies", "[judge]") {
    const Plan plan = moving_average_plan();
    for (const int lag : {0, 5}) {
        Case the_case = impulse_case(plan, values({{"max_lsb", 0.0}}));
        if (lag > 0) the_case.rules.push_back(rule(plan, "latency", values({{"latency_samples", std::int64_t{lag}}})));
        auto response = delayed(right_response(plan, the_case), lag);
        const std::size_t begin = first_judged + static_cast<std::size_t>(lag);
        response[begin - 1] += 1;
        CHECK(verdict_of(plan, the_case, response).verdict == Verdict::pass);
        response[begin] += 1;
        CHECK(verdict_of(plan, the_case, response).verdict == Verdict::fail);
    }
}

TEST_CASE("silence: the mid-code of an unsigned format is silence", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("u8");
    const Case the_case = impulse_case(plan, values({{"max_lsb", 1.0}}));
    auto response = right_response(plan, the_case);
    CHECK(response.back() == 128);
    CHECK(verdict_of(plan, the_case, response).verdict == Verdict::pass);
    std::fill(response.begin() + first_judged, response.end(), Code{126});
    const RuleVerdict verdict = verdict_of(plan, the_case, response);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.figures[0].note == "stands at -2 LSB");
}

TEST_CASE("silence: what is not a number is undecided", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Case the_case = impulse_case(plan, values({{"max_ratio", 0.5}}));
    auto response = right_response(plan, the_case);
    REQUIRE(verdict_of(plan, the_case, response).verdict == Verdict::pass);
    response[200] = 0x7fc00000;
    const RuleVerdict verdict = verdict_of(plan, the_case, response);
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason == "the response holds a value that is not a finite number");
}

TEST_CASE("silence: a case that is silent from end to end is judged from its first sample", "[judge]") {
    const Plan plan = moving_average_plan();
    const Case the_case = a_case(plan, "silence", values({{"length_samples", std::int64_t{64}}}),
                                 {rule(plan, "silence", values({{"max_lsb", 0.0}}))});
    CHECK(refusals(plan, the_case).empty());
    auto response = right_response(plan, the_case);
    CHECK(verdict_of(plan, the_case, response).verdict == Verdict::pass);
    response[0] = 1;
    CHECK(verdict_of(plan, the_case, response).verdict == Verdict::fail);
    Case running = the_case;  // what the case before left must die away first
    running.start = Start::running;
    running.start_samples = 1;
    CHECK(silence_span(plan, running, 1)->first_index == 15);
}

TEST_CASE("silence: a channel that is not driven is judged over the same stretch", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.channels = 2;
    Case the_case = impulse_case(plan, values({{"max_lsb", 0.0}}));
    the_case.channel = 1;
    auto response = right_response(plan, the_case);
    response[2 * (first_judged - 1) + 1] = 1;
    CHECK(judge(plan, the_case, response).rules[1].verdict == Verdict::pass);
    response[2 * first_judged + 1] = 1;
    const auto judgement = judge(plan, the_case, response);
    CHECK(judgement.rules[0].verdict == Verdict::pass);
    CHECK(judgement.rules[1].verdict == Verdict::fail);
    CHECK(judgement.rules[1].channel == 2);
}

TEST_CASE("silence: a stimulus without silence, or with too little, is refused with what would do", "[judge]") {
    const Plan plan = moving_average_plan();
    const Rule asked = rule(plan, "silence", values({{"max_lsb", 0.0}}));
    const auto never = refusals(
        plan, a_case(plan, "noise", values({{"level_ratio", 0.5}, {"length_samples", std::int64_t{400}}}), {asked}));
    REQUIRE(never.size() == 1);
    CHECK(never[0].position.line == 20);
    CHECK(never[0].problem == "the stimulus of case \"a case\" (shape = \"noise\") does not end in silence");
    CHECK(
        never[0].remedy ==
        "use shape = \"burst\" with repeats = 1 and at least 79 samples of silence behind it: the design's tail takes "
        "15 samples of it, and 64 are judged");
    CHECK(refusals(plan, a_case(plan, "impulse", impulse(20, 100), {asked})).empty());
    const auto little = refusals(plan, a_case(plan, "impulse", impulse(20, 99), {asked}));
    REQUIRE(little.size() == 1);
    CHECK(little[0].problem ==
          "case \"a case\" ends in a silence of 78 samples, and 79 are needed: the design's tail takes 15 samples of "
          "it, and 64 are judged");
    CHECK(little[0].remedy == "lengthen it, or use shape = \"burst\" with repeats = 1 and so much silence behind it");
    const Rule late = rule(plan, "latency", values({{"latency_samples", std::int64_t{5}}}));
    CHECK(refusals(plan, a_case(plan, "impulse", impulse(20, 104), {asked, late})).size() == 1);
    CHECK(refusals(plan, a_case(plan, "impulse", impulse(20, 105), {asked, late})).empty());
}

TEST_CASE("silence: the derived limit is the dead band that the arithmetic proves", "[judge]") {
    // 0.5 / (1 - 7/8) = 4 upward; half-up of eighths errs by -3/8 at least, so 3 downward.
    const Plan plan = one_pole_plan(Rounding::half_up);
    const Case the_case = impulse_case(plan, derived, 600);
    REQUIRE(refusals(plan, the_case).empty());
    auto response = twin_response(plan, the_case);
    const RuleVerdict right = verdict_of(plan, the_case, response);
    CHECK(right.verdict == Verdict::pass);
    CHECK(right.figures[0].note == "stands at 4 LSB; derived, -3 .. 4");
    for (const auto& [code, verdict] : {std::pair{Code{4}, Verdict::pass}, std::pair{Code{5}, Verdict::fail},
                                        std::pair{Code{-3}, Verdict::pass}, std::pair{Code{-4}, Verdict::fail}}) {
        std::fill(response.begin() + 300, response.end(), code);
        CHECK(verdict_of(plan, the_case, response).verdict == verdict);
    }
    const Plan floors = one_pole_plan(Rounding::floor);
    const Case floored = impulse_case(floors, derived, 600);
    CHECK(verdict_of(floors, floored, twin_response(floors, floored)).verdict == Verdict::pass);
}

TEST_CASE("silence: a word that may still overflow exempts its samples from a derived limit", "[judge]") {
    Plan plan = one_pole_plan(Rounding::half_up);
    plan.filter[0].design = BiquadCascade{{{1.0, 0.0, 0.0, -1.5, 0.875}}};
    plan.filter[0].arithmetic.output_overflow = Overflow::wrap;
    const Case the_case = a_case(plan, "burst",
                                 values({{"frequency_hz", 120.0},
                                         {"level_ratio", 0.9},
                                         {"on_samples", std::int64_t{200}},
                                         {"off_samples", std::int64_t{1}},
                                         {"repeats", std::int64_t{1}},
                                         {"length_samples", std::int64_t{1000}}}),
                                 {rule(plan, "silence", derived)});
    REQUIRE(refusals(plan, the_case).empty());
    const RuleVerdict verdict = verdict_of(plan, the_case, twin_response(plan, the_case));
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK_THAT(verdict.reason, Catch::Matchers::Contains("derived limits say nothing of"));
}

TEST_CASE("silence: no right board of a random arithmetic is beyond its derived limit", "[judge]") {
    constexpr std::uint64_t seed = 20261207;
    CAPTURE(seed);
    Random random(seed);
    int judged = 0, silent = 0;
    for (int round = 0; round < rounds_of(300); ++round) {
        CAPTURE(round);
        Plan plan = moving_average_plan();
        const testing::RandomChain chain = testing::random_chain(random);
        CAPTURE(text_of(chain));
        plan.filter = chain.stages;
        plan.signal.input = chain.in;
        plan.signal.output = chain.out;
        Case the_case = a_case(plan, "burst",
                               values({{"frequency_hz", random.between(10.0, 500.0)},
                                       {"level_ratio", 0.01},
                                       {"on_samples", std::int64_t{300}},
                                       {"off_samples", std::int64_t{1}},
                                       {"repeats", std::int64_t{1}},
                                       {"length_samples", std::int64_t{4000}}}),
                               {rule(plan, "silence", derived)});
        if (!refusals(plan, the_case).empty()) continue;
        const RuleVerdict verdict = verdict_of(plan, the_case, twin_response(plan, the_case));
        if (!verdict.figures.empty()) INFO(verdict.figures[0].note);
        CHECK(verdict.verdict != Verdict::fail);
        ++judged;
        if (!verdict.figures.empty() && verdict.figures[0].value == 0.0) ++silent;
    }
    CHECK(judged > rounds_of(300) / 4);
    CHECK(silent < judged);
}
