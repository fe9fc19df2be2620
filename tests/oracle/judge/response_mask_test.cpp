// A mask as the response rule judges it: of a standard, and from a file.
#include <catch2/catch.hpp>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

/// The sections of ITU-R BS.1770 for 48 kHz.
Plan k_plan(double gain = 1.0) {
    Plan plan = moving_average_plan();
    plan.signal.rate_hz = 48000.0;
    plan.signal.input = plan.signal.output = *sample_format("q31");
    plan.signal.output_per_input = 0.5;
    BiquadCascade cascade;
    cascade.sections = {{1.53512485958697 * gain, -2.69169618940638 * gain, 1.19839281085285 * gain, -1.69065929318241,
                         0.73248077421585},
                        {1.0, -2.0, 1.0, -1.99004745483398, 0.99007225036621}};
    FilterStage stage;
    stage.design = cascade;
    plan.filter = {stage};
    return plan;
}

Case noise_case(const Plan& plan, const ParameterValues& rule_words) {
    return a_case(plan, "noise", values({{"level_ratio", 0.2}, {"length_samples", std::int64_t{60000}}}),
                  {rule(plan, "response", rule_words)});
}

ParameterValues mask_file(std::vector<std::vector<double>> columns) {
    SignalFile file;
    file.path = "mask.csv";
    file.columns = std::move(columns);
    ParameterValues words;
    words.set("mask_file", std::make_shared<const SignalFile>(std::move(file)));
    return words;
}

}  // namespace

TEST_CASE("mask: a filter within a weighting passes, with what that says; one beside it fails", "[judge]") {
    const ParameterValues words = values({{"mask", std::string("k-weighting")},
                                          {"tolerance_db", 0.1},
                                          {"reference_hz", 1000.0},
                                          {"reference_db", 0.697704396}});
    const Plan plan = k_plan();
    // output_per_input is part of no response: the design has its full gain.
    const Case the_case = noise_case(plan, words);
    const RuleVerdict right = judge(plan, the_case, right_response(plan, the_case)).rules[0];
    INFO(right.reason);
    CHECK(right.verdict == Verdict::pass);
    REQUIRE(right.figures.size() == 2);
    CHECK(right.figures[0].name == "lowest gain in the mask k-weighting");
    CHECK(right.reason.find("ITU-R BS.1770-4, annex 1") == 0);
    CHECK(right.reason.find("a pass says: filter within the weighting limits, not instrument conformity") !=
          std::string::npos);
    const Plan loud = k_plan(1.05);  // 0.42 dB
    const RuleVerdict wrong =
        judge(loud, noise_case(loud, words), right_response(loud, noise_case(loud, words))).rules[0];
    CHECK(wrong.verdict == Verdict::fail);
    CHECK(wrong.figures[1].verdict == Verdict::fail);
}

TEST_CASE("mask: what lies above Nyquist is left out, and said", "[judge]") {
    const Plan plan = moving_average_plan(4);
    const Case the_case = a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{60000}}}),
                                 {rule(plan, "response", values({{"mask", std::string("c-weighting class 1")}}))});
    const RuleVerdict verdict = judge(plan, the_case, right_response(plan, the_case)).rules[0];
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.reason.find("; what lies above 600 Hz is left out; judged from ") != std::string::npos);
}

TEST_CASE("mask: the rows of a file hold from edge to edge, an empty one asks nothing", "[judge]") {
    const Plan plan = moving_average_plan(4);
    // Of 4 points: -1.5 dB at 100 Hz, and the null is at 300 Hz (published: f = k / M).
    const auto verdict = [&](double pass_min_db, double stop_max_db) {
        const Case the_case =
            a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{60000}}}),
                   {rule(plan, "response",
                         mask_file({{0.0, 100.0, 298.0},
                                    {100.0, 298.0, 302.0},
                                    {pass_min_db, -no_limit, -no_limit},
                                    {0.1, no_limit, stop_max_db}}))});
        return judge(plan, the_case, right_response(plan, the_case)).rules[0];
    };
    const RuleVerdict right = verdict(-2.0, -35.0);
    CHECK(right.verdict == Verdict::pass);
    CHECK(right.reason.empty());
    REQUIRE(right.figures.size() == 2);
    CHECK(right.figures[0].limit == -2.0);
    CHECK(verdict(-1.0, -35.0).verdict == Verdict::fail);
    CHECK(verdict(-1.0, -35.0).figures[0].name == "lowest gain in the mask mask.csv");
    CHECK(verdict(-2.0, -90.0).verdict == Verdict::fail);
}
