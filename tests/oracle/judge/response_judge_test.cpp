// What a response rule cannot judge: undecided, with the reason and what to do.
#include <catch2/catch.hpp>

#include "tests/oracle/judge/judging.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using namespace halflsb::test;
using halflsb::testing::Gaussian;

namespace {

Case noise_case(const Plan& plan, std::int64_t length, double min_db, double max_db, double from_hz = 100.0,
                double to_hz = 140.0) {
    return a_case(plan, "noise", values({{"level_ratio", 0.5}, {"length_samples", length}}),
                  {rule(plan, "response",
                        values({{"bands", std::vector<std::vector<double>>{{from_hz, to_hz, min_db, max_db}}}}))});
}

}  // namespace

TEST_CASE("response: a sample at the end of the range, where the design is not, leaves it undecided", "[judge]") {
    const Plan plan = moving_average_plan(4);
    const Case the_case = noise_case(plan, 20000, -9.0, 9.0);
    auto response = right_response(plan, the_case);
    REQUIRE(judge(plan, the_case, response).rules[0].verdict == Verdict::pass);
    for (const Code end : {Code{32767}, Code{-32768}}) {
        auto clipped = response;
        clipped[700] = end;
        clipped[900] = end;
        const RuleVerdict verdict = judge(plan, the_case, clipped).rules[0];
        CHECK(verdict.verdict == Verdict::undecided);
        CHECK(verdict.reason ==
              "2 samples stand at the end of the output's range, the first is 700, and the design does not: what clips "
              "cannot be judged by this rule; lower the level of the stimulus");
    }
}

TEST_CASE("response: an end of the range that the design reaches too is no clipping", "[judge]") {
    const Plan plan = moving_average_plan(1);
    const Case the_case = a_case(
        plan, "chirp",
        values({{"from_hz", 20.0}, {"to_hz", 500.0}, {"level_ratio", 1.0}, {"length_samples", std::int64_t{20000}}}),
        {rule(plan, "response", values({{"bands", std::vector<std::vector<double>>{{100.0, 140.0, -0.1, 0.1}}}}))});
    const auto response = right_response(plan, the_case);
    const auto [lowest, highest] = std::minmax_element(response.begin(), response.end());
    REQUIRE((*lowest == -32768 || *highest == 32767));
    CHECK(judge(plan, the_case, response).rules[0].verdict == Verdict::pass);
}

TEST_CASE("response: what is not a number is undecided and said", "[judge]") {
    Plan plan = moving_average_plan(4);
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Case the_case = noise_case(plan, 20000, -9.0, 9.0);
    auto response = right_response(plan, the_case);
    REQUIRE(judge(plan, the_case, response).rules[0].verdict == Verdict::pass);
    response[1234] = 0x7fc00000;
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason == "the response holds a value that is not a finite number");
    for (const JudgedFigure& figure : verdict.figures) CHECK_FALSE(figure.value);
}

TEST_CASE("response: too near a limit for the noise is undecided, with the samples that would tell", "[judge]") {
    const Plan plan = moving_average_plan(1);
    const Case the_case = noise_case(plan, 20000, -90.0, 0.0);
    auto response = right_response(plan, the_case);
    Gaussian normal(51);
    for (Code& code : response) code += static_cast<Code>(std::lround(3000.0 * normal.next()));
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason.find(" too near a limit to tell from 20000 samples; about ") != std::string::npos);
    CHECK(verdict.reason.find(" would tell, or a wider delta_db") != std::string::npos);
    REQUIRE(verdict.evidence);
    CHECK(verdict.evidence->samples == 20000);
    CHECK(verdict.evidence->fixed_length_samples > 20000.0);
}
