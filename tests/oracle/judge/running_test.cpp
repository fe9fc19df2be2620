#include <catch2/catch.hpp>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/accepted.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

constexpr std::int64_t discard = 500, length = 4000;

Case running_case(const Plan& plan, std::vector<Rule> rules, std::int64_t start_samples = discard) {
    Case made =
        test::a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", length}}), std::move(rules));
    made.start = Start::running;
    made.start_samples = start_samples;
    return made;
}

Rule half_lsb(const Plan& plan) { return test::rule(plan, "error", values({{"max_lsb", 0.5}})); }

/// What a board returns that was left in a loud state: nothing of the right response before the discard ends.
std::vector<Code> after_a_loud_case(std::vector<Code> response, std::size_t channels = 1) {
    for (std::size_t n = 0; n < static_cast<std::size_t>(discard) * channels; ++n)
        response[n] = n % 2 == 0 ? 32767 : -32768;
    return response;
}

}  // namespace

TEST_CASE("running: samples within the discard are judged by no rule, in any split into blocks", "[judge]") {
    for (const int channels : {1, 2}) {
        Plan plan = test::moving_average_plan();
        plan.signal.channels = channels;
        const Rule band = test::rule(plan, "response",
                                     values({{"bands", std::vector<std::vector<double>>{{10.0, 30.0, -5.0, 0.1}}}}));
        const Case the_case = running_case(plan, {half_lsb(plan), band, test::implicit_latency()});
        const auto response =
            after_a_loud_case(test::right_response(plan, the_case), static_cast<std::size_t>(channels));
        for (const std::size_t block : {1U, 7U, 256U, 5000U}) {
            const CaseJudgement judgement = judge(plan, the_case, response, block);
            CHECK(judgement.rules.size() == 3 * static_cast<std::size_t>(channels));
            CHECK(verdict_of(judgement.rules) == CaseVerdict::pass);
            CHECK(judgement.latency_told);
        }
        // The same response after a reset is full of errors.
        Case reset = the_case;
        reset.start = Start::reset;
        CHECK(verdict_of(judge(plan, reset, response).rules) == CaseVerdict::fail);
    }
}

TEST_CASE("running: the last discarded sample is not judged, the next one is", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = running_case(plan, {half_lsb(plan)});
    const auto right = test::right_response(plan, the_case);
    for (const std::size_t block : {1U, 256U, 500U, 501U, 5000U}) {
        auto response = right;
        response[discard - 1] += 9;
        CHECK(judge(plan, the_case, response, block).rules[0].verdict == Verdict::pass);
        response[discard] += 1;
        const RuleVerdict verdict = judge(plan, the_case, response, block).rules[0];
        CHECK(verdict.verdict == Verdict::fail);
        CHECK(verdict.reason == "1 of 3500 samples beyond max");
        CHECK(verdict.first_bad->index == discard);  // indices are those of the stimulus
        CHECK(verdict.first_bad->first_index == discard);
        CHECK(verdict.first_bad->response.size() == 5);
    }
}

TEST_CASE("running: a lag is measured after the discard, and judged where both have settled", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = running_case(plan, {half_lsb(plan), test::implicit_latency()});
    const auto right = test::right_response(plan, the_case);
    for (const int lag : {1, -1, 5, 64, -64}) {
        INFO("lag " << lag);
        const CaseJudgement judgement = judge(plan, the_case, after_a_loud_case(test::delayed(right, lag)));
        CHECK(judgement.rules[1].verdict == Verdict::fail);
        CHECK(*judgement.rules[1].figures[0].value == lag);
        CHECK(judgement.rules[0].verdict == Verdict::pass);
    }
    // A response that is late by 5 answers to discarded stimuli for 5 samples more.
    auto late = after_a_loud_case(test::delayed(right, 5));
    late[discard + 4] += 100;
    CHECK(judge(plan, the_case, late).rules[0].verdict == Verdict::pass);
    late[discard + 5] += 100;
    const CaseJudgement judgement = judge(plan, the_case, late);
    CHECK(judgement.rules[0].verdict == Verdict::fail);
    CHECK(judgement.rules[0].first_bad->index == discard + 5);
}

TEST_CASE("running: only what comes after the discard is evidence of latency", "[judge]") {
    // A step of 12 codes is evidence enough for a 1-point mean (12^2 > 130), if the step is not discarded.
    const Plan plan = test::moving_average_plan(1);
    const auto step_at = [&](std::int64_t at) {
        Case made = test::a_case(
            plan, "step",
            values({{"level_codes", std::int64_t{12}}, {"length_samples", std::int64_t{600}}, {"at_samples", at}}),
            {half_lsb(plan), test::implicit_latency()});
        made.start = Start::running;
        made.start_samples = 200;
        return made;
    };
    const auto told = [&](std::int64_t at) {
        const Case the_case = step_at(at);
        const bool on_paper = latency_evidence(plan, the_case).can_tell;
        const CaseJudgement judgement = judge(plan, the_case, test::right_response(plan, the_case));
        CHECK(judgement.latency_told == on_paper);
        CHECK(judgement.rules.size() == (on_paper ? 2 : 1));
        return on_paper;
    };
    // Lags are told from n = 200 + 64 on: D(1) has the term n = at, D(-1) has n = at - 1.
    CHECK(told(300));
    CHECK(told(265));
    CHECK_FALSE(told(264));
    CHECK_FALSE(told(100));
}

TEST_CASE("running: gain at tones comes from the samples after the discard alone", "[judge]") {
    const Plan plan = test::moving_average_plan(4);
    // 4 points at 120 of 1200 Hz: -2.27666 dB (check-values.md section 1).
    for (const std::string shape : {"multitone", "noise"}) {
        const auto given = shape == "noise" ? values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{40960}}})
                                            : values({{"frequencies_hz", std::vector<double>{60.0, 120.0}},
                                                      {"level_ratio", 0.9},
                                                      {"realisations", std::int64_t{16}},
                                                      {"length_samples", std::int64_t{40960}}});
        const auto verdict = [&](double min_db, double max_db) {
            Case the_case = test::a_case(
                plan, shape, given,
                {test::rule(plan, "response",
                            values({{"bands", std::vector<std::vector<double>>{{119.8, 120.2, min_db, max_db}}}}))});
            the_case.start = Start::running;
            the_case.start_samples = discard;
            return judge(plan, the_case, after_a_loud_case(test::right_response(plan, the_case))).rules[0].verdict;
        };
        INFO(shape);
        CHECK(verdict(-2.29, -2.26) == Verdict::pass);
        CHECK(verdict(-2.26, 0.0) == Verdict::fail);
        CHECK(verdict(-9.0, -2.29) == Verdict::fail);
    }
}

TEST_CASE("running: an accepted run is no reference for it, and a discard of all is undecided", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case blank = running_case(plan, {});
    const auto right = test::right_response(plan, blank);
    const Case unchanged = running_case(plan, {test::unchanged_rule(test::accepted(plan, blank, right, 100))});
    const RuleVerdict verdict = judge(plan, unchanged, right).rules[0];
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason == "a case that starts running begins in a state that the accepted run did not have");

    for (const std::int64_t all : {length, length + 1}) {
        const Case nothing = running_case(plan, {half_lsb(plan), test::implicit_latency()}, all);
        const CaseJudgement judgement = judge(plan, nothing, right);
        REQUIRE(judgement.rules.size() == 1);
        CHECK(judgement.rules[0].verdict == Verdict::undecided);
        CHECK(judgement.rules[0].reason == "no sample was compared");
        CHECK_FALSE(judgement.latency_told);
    }
    const Case one_left = running_case(plan, {half_lsb(plan)}, length - 1);
    CHECK(judge(plan, one_left, right).rules[0].verdict == Verdict::pass);
}

TEST_CASE("running: a flushed case is judged from its first sample on, as after a reset", "[judge]") {
    const Plan plan = test::moving_average_plan();
    Case the_case = running_case(plan, {half_lsb(plan)});
    the_case.start = Start::flush;
    auto response = test::right_response(plan, the_case);
    CHECK(judge(plan, the_case, response).rules[0].verdict == Verdict::pass);
    response[0] += 1;
    CHECK(judge(plan, the_case, response).rules[0].verdict == Verdict::fail);
}
