#include <catch2/catch.hpp>
#include <cmath>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/accepted.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

constexpr Code mid = 2048;

Plan u12_plan(int channels = 1) {
    Plan plan = test::moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("u12");
    plan.signal.channels = channels;
    return plan;
}

Case noise_case(const Plan& plan) {
    return test::a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{3000}}}),
                        {test::rule(plan, "error", values({{"max_lsb", 0.5}})), test::implicit_latency()});
}

}  // namespace

TEST_CASE("offset binary: a right u12 board passes, and its codes are positive", "[judge]") {
    const Plan plan = u12_plan();
    const Case the_case = noise_case(plan);
    const auto response = test::right_response(plan, the_case);
    for (const Code code : response) CHECK((code >= 0 && code <= 4095));
    CHECK(verdict_of(judge(plan, the_case, response).rules) == CaseVerdict::pass);
    // The board that forgets the offset, and the one that takes it off and does not put it back.
    auto shifted = response;
    for (Code& code : shifted) code -= mid;
    CHECK(judge(plan, the_case, shifted).rules[0].verdict == Verdict::fail);
}

TEST_CASE("offset binary: neighbours show codes and reference on one scale", "[judge]") {
    const Plan plan = u12_plan();
    const Case the_case = noise_case(plan);
    const auto right = test::right_response(plan, the_case);
    auto response = right;
    response[1200] += 7;
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    REQUIRE(verdict.first_bad);
    const Neighbourhood& around = *verdict.first_bad;
    REQUIRE(around.reference.size() == 9);
    std::vector<Code> sent(9);
    fill_case_codes(plan, the_case, 1196, sent);
    CHECK(around.stimulus == sent);
    for (std::size_t i = 0; i < 9; ++i) {
        CHECK(around.response[i] == response[1196 + i]);
        CHECK(std::fabs(around.reference[i] - right[1196 + i]) <= 0.5);
    }
}

TEST_CASE("offset binary: silence is the mid-code, on channels that are not driven and before a late response",
          "[judge]") {
    const Plan plan = u12_plan(2);
    Case the_case = noise_case(plan);
    the_case.channel = 2;
    const auto right = test::right_response(plan, the_case);
    for (std::size_t n = 0; n < right.size(); n += 2) REQUIRE(right[n] == mid);
    CHECK(verdict_of(judge(plan, the_case, right).rules) == CaseVerdict::pass);

    auto leaking = right;
    leaking[2 * 900] += 1;
    const RuleVerdict crosstalk = judge(plan, the_case, leaking).rules[0];
    CHECK(crosstalk.verdict == Verdict::fail);
    CHECK(crosstalk.channel == 1);
    CHECK(crosstalk.first_bad->stimulus == std::vector<Code>(9, mid));
    CHECK(crosstalk.first_bad->reference == std::vector<double>(9, mid));

    auto zeros = right;
    for (std::size_t n = 0; n < zeros.size(); n += 2) zeros[n] = 0;
    CHECK(judge(plan, the_case, zeros).rules[0].verdict == Verdict::fail);

    auto late = test::delayed(right, 3, 2, mid);
    CHECK(judge(plan, the_case, late).rules[1].verdict == Verdict::pass);
    // Held against silence before its start: the stimulus there was silence too.
    late[2 * 1 + 1] += 1;
    const CaseJudgement judgement = judge(plan, the_case, late);
    CHECK(judgement.rules[2].verdict == Verdict::fail);
    REQUIRE(judgement.rules[1].first_bad);
    CHECK(judgement.rules[1].first_bad->index == 1);
    CHECK(judgement.rules[1].first_bad->stimulus[0] == mid);
    CHECK(judgement.rules[1].first_bad->reference[0] == mid);
}

TEST_CASE("offset binary: an accepted run shows raw codes as its reference", "[judge]") {
    const Plan plan = u12_plan();
    Case the_case = noise_case(plan);
    const auto right = test::right_response(plan, the_case);
    the_case.rules = {test::unchanged_rule(test::accepted(plan, the_case, right, 3000))};
    auto response = right;
    response[5] += 1;
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    CHECK(verdict.verdict == Verdict::fail);
    for (std::size_t i = 0; i < verdict.first_bad->reference.size(); ++i)
        CHECK(verdict.first_bad->reference[i] == right[1 + i]);
}
