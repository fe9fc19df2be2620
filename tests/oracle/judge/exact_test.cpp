// The rule exact: the response equals the twin of the declared arithmetic, bit for bit.
#include <bit>
#include <catch2/catch.hpp>

#include "oracle/judge/admission.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::delayed;
using test::judge;
using test::values;

namespace {

Plan exact_plan(Rounding rounding = Rounding::half_up, int channels = 1) {
    Plan plan = test::moving_average_plan();
    plan.signal.channels = channels;
    plan.filter[0].arithmetic.rounding = rounding;
    return plan;
}

Case noise_case(const Plan& plan, std::int64_t length = 3000) {
    return test::a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", length}}),
                        {test::rule(plan, "exact", {}), test::implicit_latency()});
}

}  // namespace

TEST_CASE("exact: a board with the declared arithmetic passes, in any blocks", "[judge]") {
    const Plan plan = exact_plan();
    const Case the_case = noise_case(plan);
    const auto response = test::right_response(plan, the_case);  // rounds once, half up
    for (const std::size_t block : {1u, 7u, 256u, 5000u}) {
        const RuleVerdict verdict = judge(plan, the_case, response, block).rules.at(0);
        CHECK(verdict.verdict == Verdict::pass);
        CHECK(verdict.reference == "twin");
        CHECK(verdict.reason == "every sample equals the declared arithmetic");
        CHECK_FALSE(verdict.first_bad);
    }
}

TEST_CASE("exact: a floor in place of rounding fails although no sample is a whole LSB off", "[judge]") {
    const Plan plan = exact_plan(Rounding::floor);
    const Case the_case = noise_case(plan);
    const auto response = test::right_response(plan, the_case);
    const RuleVerdict verdict = judge(plan, the_case, response).rules.at(0);
    CHECK(verdict.verdict == Verdict::fail);
    REQUIRE(verdict.first_bad);
    const Neighbourhood& around = *verdict.first_bad;
    const auto at = static_cast<std::size_t>(around.index - around.first_index);
    CHECK(around.response[at] == around.reference[at] + 1.0);
    for (std::size_t i = 0; i < at; ++i) CHECK(around.response[i] == around.reference[i]);
    // Remainders 8 .. 15 of 16 round up: half of the samples, give or take 5 sigma of 27.
    REQUIRE(verdict.figures.size() == 1);
    CHECK(verdict.figures[0].name == "differing samples");
    CHECK(*verdict.figures[0].value > 1363.0);
    CHECK(*verdict.figures[0].value < 1637.0);
    CHECK(verdict.reason.find(" of 3000 samples differ from the declared arithmetic, by up to 1 LSB") !=
          std::string::npos);
}

TEST_CASE("exact: one wrong sample is told with its index and size", "[judge]") {
    const Plan plan = exact_plan();
    const Case the_case = noise_case(plan);
    auto response = test::right_response(plan, the_case);
    response[1234] -= 7;
    const RuleVerdict verdict = judge(plan, the_case, response, 100).rules.at(0);
    CHECK(verdict.reason == "1 of 3000 samples differs from the declared arithmetic, by 7 LSB");
    REQUIRE(verdict.first_bad);
    CHECK(verdict.first_bad->index == 1234);
    CHECK(verdict.first_bad->response.size() == 9);
}

TEST_CASE("exact: a late board fails its latency, and is exact where it lies", "[judge]") {
    const Plan plan = exact_plan();
    const Case the_case = noise_case(plan);
    const auto response = delayed(test::right_response(plan, the_case), 3);
    const auto rules = judge(plan, the_case, response).rules;
    REQUIRE(rules.size() == 2);
    CHECK(rules[0].verdict == Verdict::pass);
    CHECK(rules[0].reason == "judged at the measured lag of 3 samples; every sample equals the declared arithmetic");
    CHECK(rules[1].verdict == Verdict::fail);
}

TEST_CASE("exact: each channel has a twin of its own", "[judge]") {
    Plan plan = exact_plan(Rounding::half_up, 2);
    FilterStage second = plan.filter[0];
    second.design = MovingAverage{4};
    plan.filter[0].channels = {1};
    second.channels = {2};
    plan.filter.push_back(second);
    const Case the_case = noise_case(plan);
    auto response = test::right_response(plan, the_case);
    for (const RuleVerdict& rule : judge(plan, the_case, response).rules) CHECK(rule.verdict == Verdict::pass);
    response[2 * 50 + 1] += 1;
    const auto rules = judge(plan, the_case, response).rules;
    CHECK(rules[0].verdict == Verdict::pass);
    CHECK(rules[1].verdict == Verdict::fail);
    CHECK(rules[1].channel == 2);
}

TEST_CASE("exact: floats are compared as bits, a zero of the other sign differs", "[judge]") {
    Plan plan = test::moving_average_plan(2);
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Case the_case = test::a_case(
        plan, "step",
        values({{"level_ratio", 0.5}, {"at_samples", std::int64_t{40}}, {"length_samples", std::int64_t{80}}}),
        {test::rule(plan, "exact", {})});
    std::vector<Code> response(80, 0);
    for (std::size_t n = 40; n < 80; ++n) response[n] = std::bit_cast<Code>(n == 40 ? 0.25f : 0.5f);
    CHECK(judge(plan, the_case, response).rules.at(0).verdict == Verdict::pass);
    response[7] = std::bit_cast<Code>(-0.0f);
    const RuleVerdict verdict = judge(plan, the_case, response).rules.at(0);
    CHECK(verdict.reason == "1 of 80 samples differs from the declared arithmetic");
    REQUIRE(verdict.first_bad);
    CHECK(verdict.first_bad->index == 7);
}

TEST_CASE("exact: refused where the arithmetic is not all said, naming the stage", "[judge]") {
    Plan plan = test::moving_average_plan();
    auto found = refusals(plan, noise_case(plan));
    REQUIRE(found.size() == 1);
    CHECK(found[0].position.line == 20);
    CHECK(found[0].problem == "exact needs the whole arithmetic, and rounding is not said");
    CHECK(found[0].remedy == "say how results are rounded: \"floor\" for a shift");
    plan.filter[0].arithmetic.rounding = Rounding::floor;
    CHECK(refusals(plan, noise_case(plan)).empty());
    plan.filter.push_back(plan.filter[0]);
    found = refusals(plan, noise_case(plan));
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem == "exact needs the whole arithmetic, and of stage 1 stage_format is not said");
}

TEST_CASE("exact: a state that nobody knows to the bit is no start", "[judge]") {
    Plan plan = exact_plan();
    Case the_case = noise_case(plan);
    the_case.start = Start::flush;
    the_case.start_samples = 15;
    CHECK(refusals(plan, the_case).empty());  // an integer sum forgets all
    plan.filter[0].arithmetic.fraction_saving = true;
    auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "case \"a case\" starts with a flush, which leaves the firmware in a state that nobody knows to the bit");
    CHECK(found[0].remedy == "start it with \"reset\", or write the rule in another case");
    the_case.start = Start::running;
    found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "case \"a case\" starts running, which leaves the firmware in a state that nobody knows to the bit");
}
