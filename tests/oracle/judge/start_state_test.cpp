// What stands before the first sample of a case: the filter's Initial after a reset, zeros after a flush.
#include <catch2/catch.hpp>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

Verdict error_verdict(Plan plan, Start start, Initial of_plan, Initial of_board) {
    const auto noise = values({{"level_ratio", 0.5}, {"length_samples", std::int64_t{2000}}});
    plan.filter[0].initial = of_plan;
    Case the_case = test::a_case(plan, "noise", noise, {test::rule(plan, "error", values({{"max_lsb", 0.5}}))});
    Plan board = plan;
    board.filter[0].initial = of_board;
    const auto response = test::right_response(board, the_case);
    the_case.start = start;
    const auto judgement = test::judge(plan, the_case, response);
    for (const RuleVerdict& verdict : judgement.rules) {
        if (std::holds_alternative<ErrorRule>(verdict.rule.kind)) return verdict.verdict;
    }
    FAIL("no verdict on the error");
    return Verdict::fail;
}

}  // namespace

TEST_CASE("start: a board that begins with its first sample passes a plan that says so, and no other", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Initial zeros = Initial::zeros, first = Initial::first_sample, growing = Initial::growing;
    for (const Initial one : {zeros, first, growing}) {
        for (const Initial other : {zeros, first, growing}) {
            INFO(static_cast<int>(one) << " in the plan, " << static_cast<int>(other) << " on the board");
            CHECK(error_verdict(plan, Start::reset, one, other) == (one == other ? Verdict::pass : Verdict::fail));
        }
    }
}

TEST_CASE("start: after a flush the filter stands on zeros, however it starts", "[judge]") {
    const Plan plan = test::moving_average_plan();
    CHECK(error_verdict(plan, Start::flush, Initial::first_sample, Initial::zeros) == Verdict::pass);
    CHECK(error_verdict(plan, Start::flush, Initial::growing, Initial::zeros) == Verdict::pass);
    CHECK(error_verdict(plan, Start::flush, Initial::first_sample, Initial::first_sample) == Verdict::fail);
}
