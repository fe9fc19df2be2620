#include <catch2/catch.hpp>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

/// Left and right load cell of a CW-7: a 16-point mean on both, and an 8-point mean on the right one after it.
Plan two_cells() {
    Plan plan = test::moving_average_plan();
    plan.signal.channels = 2;
    FilterStage right;
    right.design = MovingAverage{8};
    right.channels = {2};
    plan.filter.push_back(right);
    return plan;
}

const ParameterValues noise =
    values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{3000}}, {"seed", std::int64_t{5}}});

Case noise_case(const Plan& plan, std::vector<Rule> rules, std::optional<int> channel = std::nullopt) {
    Case made = test::a_case(plan, "noise", noise, std::move(rules));
    made.channel = channel;
    return made;
}

Rule half_lsb(const Plan& plan) { return test::rule(plan, "error", values({{"max_lsb", 0.5}})); }

Rule band(const Plan& plan, double min_db, double max_db) {
    return test::rule(plan, "response",
                      values({{"bands", std::vector<std::vector<double>>{{59.0, 61.0, min_db, max_db}}}}));
}

std::vector<int> channels_of(const CaseJudgement& judgement) {
    std::vector<int> found;
    for (const RuleVerdict& verdict : judgement.rules) found.push_back(verdict.channel);
    return found;
}

}  // namespace

TEST_CASE("channels: each is held against the filter of its own stages, rules first, then channels", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = noise_case(plan, {half_lsb(plan), band(plan, -90.0, 90.0), test::implicit_latency()});
    const auto response = test::right_response(plan, the_case);
    for (const std::size_t block : {1U, 7U, 256U, 5000U}) {
        const CaseJudgement judgement = judge(plan, the_case, response, block);
        CHECK(channels_of(judgement) == std::vector<int>{1, 2, 1, 2, 1, 2});
        CHECK(verdict_of(judgement.rules) == CaseVerdict::pass);
        CHECK(judgement.latency_told);
        for (std::size_t i = 0; i < judgement.rules.size(); ++i)
            CHECK(judgement.rules[i].rule.kind.index() == the_case.rules[i / 2].kind.index());
    }
}

TEST_CASE("channels: a signal with one channel names none", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, {half_lsb(plan), test::implicit_latency()});
    CHECK(channels_of(judge(plan, the_case, test::right_response(plan, the_case))) == std::vector<int>{0, 0});
}

TEST_CASE("channels: a code beyond the limit fails its own channel and shows that one's neighbours", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = noise_case(plan, {half_lsb(plan), test::implicit_latency()});
    const auto right = test::right_response(plan, the_case);
    for (const std::size_t bad : {0UL, 255UL, 256UL, 2999UL}) {
        for (const std::size_t channel : {1UL, 2UL}) {
            auto response = right;
            response[bad * 2 + channel - 1] += 1;
            const CaseJudgement judgement = judge(plan, the_case, response);
            INFO("instant " << bad << ", channel " << channel);
            CHECK(judgement.rules[channel - 1].verdict == Verdict::fail);
            CHECK(judgement.rules[2 - channel].verdict == Verdict::pass);
            REQUIRE(judgement.rules[channel - 1].first_bad);
            const Neighbourhood& around = *judgement.rules[channel - 1].first_bad;
            CHECK(around.index == static_cast<std::int64_t>(bad));
            for (std::size_t i = 0; i < around.response.size(); ++i) {
                const std::size_t instant = static_cast<std::size_t>(around.first_index) + i;
                CHECK(around.response[i] == response[instant * 2 + channel - 1]);
            }
        }
    }
}

TEST_CASE("channels: two that are swapped fail both, though each code is a right one", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = noise_case(plan, {half_lsb(plan), test::implicit_latency()});
    auto response = test::right_response(plan, the_case);
    for (std::size_t n = 0; n < response.size(); n += 2) std::swap(response[n], response[n + 1]);
    const CaseJudgement judgement = judge(plan, the_case, response);
    CHECK(judgement.rules[0].verdict == Verdict::fail);
    CHECK(judgement.rules[1].verdict == Verdict::fail);
}

TEST_CASE("channels: alike filters that are swapped are seen when one channel is driven", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.signal.channels = 2;
    const Case both = noise_case(plan, {half_lsb(plan)});
    auto response = test::right_response(plan, both);
    for (std::size_t n = 0; n < response.size(); n += 2) std::swap(response[n], response[n + 1]);
    CHECK(verdict_of(judge(plan, both, response).rules) == CaseVerdict::pass);  // what this case cannot see

    const Case left = noise_case(plan, {half_lsb(plan)}, 1);
    response = test::right_response(plan, left);
    CHECK(verdict_of(judge(plan, left, response).rules) == CaseVerdict::pass);
    for (std::size_t n = 0; n < response.size(); n += 2) std::swap(response[n], response[n + 1]);
    const CaseJudgement judgement = judge(plan, left, response);
    CHECK(judgement.rules[0].verdict == Verdict::fail);
    CHECK(judgement.rules[1].verdict == Verdict::fail);
}

TEST_CASE("channels: crosstalk of 1 LSB is an error of the silent channel, on both sides of the limit", "[judge]") {
    const Plan plan = two_cells();
    const auto limited = [&](double max_lsb) {
        return noise_case(plan,
                          {test::rule(plan, "error", values({{"max_lsb", max_lsb}})), band(plan, -90.0, 90.0),
                           test::implicit_latency()},
                          2);
    };
    auto response = test::right_response(plan, limited(0.5));
    for (std::size_t n = 0; n < response.size(); n += 2) REQUIRE(response[n] == 0);
    CHECK(verdict_of(judge(plan, limited(0.5), response).rules) == CaseVerdict::pass);

    response[2 * 1777] = -1;
    const CaseJudgement judgement = judge(plan, limited(0.5), response);
    // Latency and response are told by the driven channel alone.
    CHECK(channels_of(judgement) == std::vector<int>{1, 2, 2, 2});
    CHECK(judgement.latency_told);
    CHECK(judgement.rules[0].verdict == Verdict::fail);
    CHECK(judgement.rules[1].verdict == Verdict::pass);
    CHECK(judgement.rules[2].verdict == Verdict::pass);
    CHECK(judgement.rules[3].verdict == Verdict::pass);
    CHECK(judgement.rules[0].first_bad->index == 1777);
    CHECK(judgement.rules[0].first_bad->stimulus == std::vector<Code>(9, 0));
    CHECK(judgement.rules[0].first_bad->reference == std::vector<double>(9, 0.0));

    CHECK(verdict_of(judge(plan, limited(1.0), response).rules) == CaseVerdict::pass);
    CHECK(judge(plan, limited(0.999999), response).rules[0].verdict == Verdict::fail);
}

TEST_CASE("channels: an SNR is asked of driven channels only, other limits of the rule of all", "[judge]") {
    const Plan plan = two_cells();
    const auto ruled = [&](const ParameterValues& limits) {
        return noise_case(plan, {test::rule(plan, "error", limits)}, 1);
    };
    const Case only_snr = ruled(values({{"min_snr_db", 60.0}}));
    auto response = test::right_response(plan, only_snr);
    response[2 * 10 + 1] = 1;  // on the silent one
    CHECK(channels_of(judge(plan, only_snr, response)) == std::vector<int>{1});
    const CaseJudgement both = judge(plan, ruled(values({{"min_snr_db", 60.0}, {"max_lsb", 0.5}})), response);
    CHECK(channels_of(both) == std::vector<int>{1, 2});
    CHECK(both.rules[0].verdict == Verdict::pass);
    CHECK(both.rules[0].figures.back().name == "snr");
    CHECK(both.rules[1].verdict == Verdict::fail);
    CHECK(both.rules[1].figures.back().name == "bias");
}

TEST_CASE("channels: one that is late fails latency alone, and the capture is read again once", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = noise_case(plan, {half_lsb(plan), test::implicit_latency()});
    const auto right = test::right_response(plan, the_case);
    const auto late = test::delayed(right, 3, 2);
    auto one_late = right;
    for (std::size_t n = 1; n < right.size(); n += 2) one_late[n] = late[n];
    const CaseJudgement one = judge(plan, the_case, one_late);
    CHECK(one.rules[0].verdict == Verdict::pass);
    CHECK(one.rules[0].reason.empty());
    CHECK(one.rules[1].verdict == Verdict::pass);
    CHECK(one.rules[1].reason.rfind("judged at the measured lag of 3 samples", 0) == 0);
    CHECK(one.rules[2].verdict == Verdict::pass);
    CHECK(one.rules[3].verdict == Verdict::fail);
    CHECK(one.rules[3].reason == "the response is 3 samples behind the reference");

    int replays = 0;
    const CaseJudgement both = judge(plan, the_case, late, 256, &replays);
    CHECK(replays == 1);  // 3000 samples are one block of the judge
    CHECK(both.rules[2].verdict == Verdict::fail);
    CHECK(both.rules[3].verdict == Verdict::fail);
    CHECK(both.rules[0].verdict == Verdict::pass);
}

TEST_CASE("channels: a late driven channel does not hide what leaks into the silent one", "[judge]") {
    const Plan plan = two_cells();
    const Case the_case = noise_case(plan, {half_lsb(plan), test::implicit_latency()}, 1);
    auto response = test::delayed(test::right_response(plan, the_case), 2, 2);
    response[2 * 500 + 1] = 1;
    const CaseJudgement judgement = judge(plan, the_case, response);
    REQUIRE(channels_of(judgement) == std::vector<int>{1, 2, 1});
    CHECK(judgement.rules[0].verdict == Verdict::pass);
    CHECK(judgement.rules[1].verdict == Verdict::fail);
    CHECK(judgement.rules[1].first_bad->index == 500);
    CHECK(judgement.rules[2].verdict == Verdict::fail);
}

TEST_CASE("channels: the band of each is held against its own design, at the case's own rate", "[judge]") {
    const Plan plan = two_cells();
    // |A(f)| of M points is |sin(pi f M) / (M sin(pi f))| (Oppenheim and Schafer, moving average). At 60 Hz of 1200
    // it is -12.58 dB for 16 points (-11.96 at 59 Hz, -13.25 at 61 Hz), and the mean of 8 takes another 2.38 dB.
    const auto verdicts = [&](double min_db, double max_db, double rate_hz) {
        Case made = test::a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{40960}}}),
                                 {band(plan, min_db, max_db)});
        made.rate_hz = rate_hz;
        return judge(plan, made, test::right_response(plan, made)).rules;
    };
    const auto left = verdicts(-13.5, -11.5, 1200.0);
    CHECK(left[0].verdict == Verdict::pass);
    CHECK(left[1].verdict == Verdict::fail);
    const auto right = verdicts(-16.5, -14.0, 1200.0);
    CHECK(right[0].verdict == Verdict::fail);
    CHECK(right[1].verdict == Verdict::pass);
    // Of 2400 Hz the same 60 Hz is half the frequency, where 16 points give -2.41 dB (-2.33 to -2.50).
    CHECK(verdicts(-13.5, -11.5, 2400.0)[0].verdict == Verdict::fail);
    CHECK(verdicts(-2.6, -2.2, 2400.0)[0].verdict == Verdict::pass);
}
