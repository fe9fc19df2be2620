// Cases whose filter changes the sample rate: everything is judged at the rate of what comes back.
#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/judge/admission.hpp"
#include "oracle/judge/case_rates.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

namespace halflsb {
namespace {

FilterStage stage_of(FilterDesign design) {
    FilterStage stage;
    stage.design = std::move(design);
    return stage;
}

Plan plan_of(FilterChain chain) {
    Plan plan = test::moving_average_plan();
    plan.filter = std::move(chain);
    return plan;
}

FilterChain decimator() { return {stage_of(FirDecimator{{0.1, 0.2, 0.4, 0.2, 0.1}, 4})}; }
FilterChain interpolator() { return {stage_of(FirInterpolator{{0.25, 0.5, 0.75, 0.75, 0.5, 0.25}, 3})}; }
FilterChain three_halves() {
    FilterChain chain = interpolator();
    chain.push_back(stage_of(FirDecimator{{0.5, 0.5}, 2}));
    return chain;
}

ParameterValues noise_of(std::int64_t length) {
    return test::values({{"level_ratio", 0.5}, {"length_samples", length}});
}

std::vector<Rule> rules_of(const Plan& plan) {
    return {test::implicit_latency(), test::rule(plan, "error", test::values({{"max_lsb", 0.5000001}}))};
}

const RuleVerdict& verdict_of_kind(const CaseJudgement& judgement, std::string_view kind) {
    for (const RuleVerdict& verdict : judgement.rules) {
        if (kind_name(verdict.rule) == kind) return verdict;
    }
    FAIL("no verdict");
    return judgement.rules.front();
}

}  // namespace

TEST_CASE("rates: how many come back, and which sample was the newest then", "[judge]") {
    Plan plan = plan_of(three_halves());
    const Case the_case = test::a_case(plan, "noise", noise_of(4096), {});
    const CaseRates rates(plan, the_case);
    CHECK(rates.cycle() == RateCycle{2, 3});
    CHECK(returned_samples(plan, the_case) == 6144);
    CHECK(returned_rate_hz(plan, the_case) == 1800.0);
    // 3 for each sent, each second of them kept: outputs 0, 1 of sample 0, output 2 of sample 1.
    for (const auto& [returned, newest] : std::vector<std::pair<std::int64_t, std::int64_t>>{
             {0, 0}, {1, 0}, {2, 1}, {3, 2}, {4, 2}, {5, 3}, {3001, 2000}})
        CHECK(rates.newest_sent(returned) == newest);
    const CaseRates steady(test::moving_average_plan(), the_case);
    CHECK_FALSE(steady.changes());
    CHECK(steady.newest_sent(77) == 77);
    CHECK(rates.cycles_within(4096) == 1365);
    CHECK(rates.cycles_within(1) == 1);
}

TEST_CASE("rates: a right response passes in blocks of any size", "[judge]") {
    for (const FilterChain& chain : {decimator(), interpolator(), three_halves()}) {
        Plan plan = plan_of(chain);
        const Case the_case = test::a_case(plan, "noise", noise_of(12000), rules_of(plan));
        CHECK(refusals(plan, the_case).empty());
        const auto response = test::right_response(plan, the_case);
        CHECK(static_cast<std::int64_t>(response.size()) == returned_samples(plan, the_case));
        for (const std::size_t block : {1u, 7u, 4096u, 100000u}) {
            const auto judgement = test::judge(plan, the_case, response, block);
            CHECK(judgement.latency_told);
            REQUIRE(judgement.rules.size() == 2);
            for (const RuleVerdict& verdict : judgement.rules) CHECK(verdict.verdict == Verdict::pass);
        }
    }
}

TEST_CASE("rates: a lag counts samples of the response", "[judge]") {
    Plan plan = plan_of(decimator());
    const Case the_case = test::a_case(plan, "noise", noise_of(12000), rules_of(plan));
    const auto judgement = test::judge(plan, the_case, test::delayed(test::right_response(plan, the_case), 2), 100);
    const RuleVerdict& latency = verdict_of_kind(judgement, "latency");
    CHECK(latency.verdict == Verdict::fail);
    CHECK(latency.reason == "the response is 2 samples behind the reference");
    CHECK(verdict_of_kind(judgement, "error").verdict == Verdict::pass);
}

TEST_CASE("rates: an output taken at another input of its group is an error", "[judge]") {
    Plan plan = plan_of(decimator()), board = plan_of({stage_of(FirDecimator{{0.0, 0.1, 0.2, 0.4, 0.2, 0.1}, 4})});
    const Case the_case = test::a_case(plan, "noise", noise_of(12000), rules_of(plan));
    const auto judgement = test::judge(plan, the_case, test::right_response(board, the_case));
    const RuleVerdict& error = verdict_of_kind(judgement, "error");
    CHECK(error.verdict == Verdict::fail);
    REQUIRE(error.first_bad);
    // Shown beside each sample: the newest one sent.
    const std::int64_t index = error.first_bad->index;
    std::vector<Code> sent(1);
    fill_case_codes(plan, the_case, 4 * index, sent);
    const auto at = static_cast<std::size_t>(index - error.first_bad->first_index);
    CHECK(error.first_bad->stimulus[at] == sent[0]);
}

TEST_CASE("rates: the response of an interpolator is told by noise, of a decimator by tones", "[judge]") {
    // Half a LSB in many thousand samples moves a gain by far less than a hundredth of a dB.
    const auto judged_at_100_hz = [](const Plan& plan, const Plan& board, const Case& asked) {
        Case the_case = asked;
        const double gain = std::abs(response_at(plan.filter, 100.0 / 1200.0));
        const double design_db = 20.0 * std::log10(gain);
        the_case.rules = {test::rule(
            plan, "response",
            test::values(
                {{"bands", std::vector<std::vector<double>>{{99.0, 101.0, design_db - 0.01, design_db + 0.01}}}}))};
        CHECK(refusals(plan, the_case).empty());
        const auto judgement = test::judge(plan, the_case, test::right_response(board, the_case));
        REQUIRE(judgement.rules.size() == 1);
        return judgement.rules[0].verdict;
    };
    Plan up = plan_of(interpolator()), down = plan_of(decimator());
    // 3600 samples of 1200 Hz: segments of 1024 of 3600 Hz, a bin at 98.4 and 101.95 Hz, so a longer one.
    const Case noise = test::a_case(up, "noise", noise_of(40000), {});
    const Case sine = test::a_case(down, "sine",
                                   test::values({{"level_ratio", 0.5},
                                                 {"frequency_hz", 100.0},
                                                 {"realisations", std::int64_t{8}},
                                                 {"length_samples", std::int64_t{12000}}}),
                                   {});
    CHECK(judged_at_100_hz(up, up, noise) == Verdict::pass);
    CHECK(judged_at_100_hz(down, down, sine) == Verdict::pass);
    Plan louder_up = up, louder_down = down;
    for (double& tap : std::get<FirInterpolator>(louder_up.filter[0].design).taps) tap *= 1.002;
    for (double& tap : std::get<FirDecimator>(louder_down.filter[0].design).taps) tap *= 1.002;
    CHECK(judged_at_100_hz(up, louder_up, noise) == Verdict::fail);
    CHECK(judged_at_100_hz(down, louder_down, sine) == Verdict::fail);

    const Rule anywhere = test::rule(
        down, "response", test::values({{"bands", std::vector<std::vector<double>>{{10.0, 90.0, -9.0, 9.0}}}}));
    const auto found = refusals(down, test::a_case(down, "noise", noise_of(40000), {anywhere}));
    REQUIRE(found.size() == 1);
    CHECK(
        found[0].problem ==
        "case \"a case\" asks for the response of a decimator with a stimulus that reaches 600 Hz, and what lies above "
        "150 Hz, half the rate of its output, comes through at other frequencies");
    CHECK(found[0].remedy == "use a multitone, a sine or a chirp below 150 Hz");
    const Plan both = plan_of(three_halves());
    CHECK(refusals(both, test::a_case(both, "noise", noise_of(40000), {anywhere})).size() == 1);
}

TEST_CASE("rates: what is sent and discarded are whole cycles", "[judge]") {
    Plan plan = plan_of(three_halves());
    const auto refused = [&](const Case& the_case) {
        const auto found = refusals(plan, the_case);
        return found.empty() ? "" : found[0].problem + "; " + found[0].remedy;
    };
    Case the_case = test::a_case(plan, "noise", noise_of(1001), rules_of(plan));
    CHECK(refused(the_case) ==
          "case \"a case\" sends 1001 samples, and its filter, which returns 3 for 2, needs a multiple of 2; send "
          "1002 samples");
    the_case = test::a_case(plan, "noise", noise_of(1000), rules_of(plan));
    CHECK(refused(the_case) == "");
    the_case.start = Start::running;
    the_case.start_samples = 13;
    CHECK(refused(the_case) ==
          "case \"a case\" discards 13 samples, and its filter, which returns 3 for 2, needs a multiple of 2; "
          "discard_samples = 14");
    the_case.start_samples = 14;
    CHECK(refused(the_case) == "");
    CHECK(first_judged_sample(plan, the_case) == 21);
    CHECK(judged_samples(plan, the_case) == 1500 - 21);
}

TEST_CASE("rates: as many out as in, and still whole cycles", "[judge]") {
    FilterChain chain = interpolator();
    chain.push_back(stage_of(FirDecimator{{1.0}, 3}));
    Plan plan = plan_of(chain);
    const Case the_case = test::a_case(plan, "noise", noise_of(3001), rules_of(plan));
    CHECK(CaseRates(plan, the_case).changes());
    CHECK(refusals(plan, the_case).empty());
    const auto judgement = test::judge(plan, the_case, test::right_response(plan, the_case), 64);
    for (const RuleVerdict& verdict : judgement.rules) CHECK(verdict.verdict == Verdict::pass);
}

TEST_CASE("rates: a cycle longer than a board can tell is refused", "[judge]") {
    Plan plan = plan_of({stage_of(CicDecimator{1, 256, 1, {}}), stage_of(CicDecimator{1, 256, 1, {}})});
    const Case the_case = test::a_case(plan, "noise", noise_of(65536), {});
    const auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem == "case \"a case\": its filter begins anew only every 65536 samples, 65535 are possible");
}

TEST_CASE("rates: channels must change the rate alike", "[judge]") {
    Plan plan = plan_of(decimator());
    plan.signal.channels = 2;
    Case the_case = test::a_case(plan, "noise", noise_of(4000), rules_of(plan));
    CHECK(refusals(plan, the_case).empty());
    const auto judgement = test::judge(plan, the_case, test::right_response(plan, the_case), 64);
    for (const RuleVerdict& verdict : judgement.rules) CHECK(verdict.verdict == Verdict::pass);
    plan.filter[0].channels = {1};
    const auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(
        found[0].problem ==
        "case \"a case\": its channels change the sample rate in different ways, and the samples of an instant travel "
        "together");
}

}  // namespace halflsb
