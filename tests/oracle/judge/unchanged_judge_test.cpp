#include <catch2/catch.hpp>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/accepted.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::accepted;
using test::judge;
using test::unchanged_rule;
using test::values;

namespace {

constexpr std::size_t length = 3000, kept = 1000, block = 256;
const std::string run = "the accepted run of baseline/cw7, accepted 2026-12-01T09:30:00Z";

Plan a_plan(int channels = 1) {
    Plan plan = test::moving_average_plan();
    plan.signal.channels = channels;
    return plan;
}

Case noise_case(const Plan& plan, std::vector<Rule> rules = {}) {
    return test::a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", std::int64_t{length}}}),
                        std::move(rules));
}

/// The verdict on `response` of the rule for a baseline of the right response, changed by `edit`.
template <class Edit>
RuleVerdict verdict_on(const Plan& plan, const std::vector<Code>& response, std::size_t kept_samples,
                       std::size_t block_samples, std::optional<double> max_lsb, Edit edit, std::size_t step = 256) {
    const Case blank = noise_case(plan);
    AcceptedResponse baseline = accepted(plan, blank, test::right_response(plan, blank), kept_samples, block_samples);
    edit(baseline);
    const CaseJudgement judgement =
        judge(plan, noise_case(plan, {unchanged_rule(std::move(baseline), max_lsb)}), response, step);
    REQUIRE(judgement.rules.size() == 1);
    return judgement.rules[0];
}

RuleVerdict verdict_on(const Plan& plan, const std::vector<Code>& response, std::size_t kept_samples,
                       std::size_t block_samples, std::optional<double> max_lsb = std::nullopt,
                       std::size_t step = 256) {
    return verdict_on(
        plan, response, kept_samples, block_samples, max_lsb, [](AcceptedResponse&) {}, step);
}

std::vector<Code> right(const Plan& plan) { return test::right_response(plan, noise_case(plan)); }

}  // namespace

TEST_CASE("unchanged: an equal response passes, whatever of it the baseline keeps", "[judge]") {
    for (const int channels : {1, 3}) {
        const Plan plan = a_plan(channels);
        for (const std::size_t keeps : {std::size_t{0}, kept, length}) {
            for (const std::size_t step : {1U, 7U, 256U, 5000U}) {
                const RuleVerdict verdict = verdict_on(plan, right(plan), keeps, block, std::nullopt, step);
                CHECK(verdict.verdict == Verdict::pass);
                CHECK(verdict.reference == "accepted");
                CHECK(verdict.channel == 0);
                CHECK(verdict.reason == "every sample equals " + run);
                REQUIRE(verdict.figures.size() == 1);
                CHECK(verdict.figures[0].name == "changed samples");
                CHECK(*verdict.figures[0].value == 0.0);
                CHECK(*verdict.figures[0].limit == 0.0);
                CHECK_FALSE(verdict.first_bad);
            }
        }
    }
}

TEST_CASE("unchanged: one code off by 1 LSB fails wherever it is kept, with its neighbours", "[judge]") {
    const Plan plan = a_plan();
    const auto good = right(plan);
    for (const std::size_t bad : {0UL, 3UL, 255UL, 256UL, 700UL, kept - 2, kept - 1}) {
        for (const std::size_t step : {1U, 3U, 256U, 5000U}) {
            auto response = good;
            response[bad] -= 1;
            INFO("sample " << bad << ", blocks of " << step);
            const RuleVerdict verdict = verdict_on(plan, response, kept, block, std::nullopt, step);
            CHECK(verdict.verdict == Verdict::fail);
            CHECK(verdict.reason ==
                  "1 of the first 1000 samples, which the baseline keeps, differs from " + run + ", by 1 LSB");
            CHECK(*verdict.figures[0].value == 1.0);
            CHECK(*verdict.figures[0].margin == -1.0);
            CHECK_FALSE(verdict.figures[0].passed());
            CHECK(verdict.figures[0].note == "of the first 1000");
            REQUIRE(verdict.first_bad);
            const Neighbourhood& around = *verdict.first_bad;
            const std::size_t first = bad < 4 ? 0 : bad - 4;
            CHECK(around.index == static_cast<std::int64_t>(bad));
            CHECK(around.first_index == static_cast<std::int64_t>(first));
            REQUIRE(around.response.size() == bad + 4 - first + 1);
            CHECK(around.stimulus.size() == around.response.size());
            // The neighbours that the baseline does not keep have no reference.
            CHECK(around.reference.size() == std::min(bad + 5, kept) - first);
            for (std::size_t i = 0; i < around.response.size(); ++i) CHECK(around.response[i] == response[first + i]);
            for (std::size_t i = 0; i < around.reference.size(); ++i) CHECK(around.reference[i] == good[first + i]);
        }
    }
}

TEST_CASE("unchanged: all samples kept, their first and last ones differ", "[judge]") {
    const Plan plan = a_plan();
    auto response = right(plan);
    response[length - 1] += 1;
    const RuleVerdict last = verdict_on(plan, response, length, 0);
    CHECK(last.reason == "1 of 3000 samples differs from " + run + ", by 1 LSB");
    CHECK(last.first_bad->index == static_cast<std::int64_t>(length) - 1);
    CHECK(last.first_bad->response.size() == 5);
    response[0] += 3;
    const RuleVerdict both = verdict_on(plan, response, length, 0);
    CHECK(both.reason == "2 of 3000 samples differ from " + run + ", by up to 3 LSB");
    CHECK(both.first_bad->index == 0);
}

TEST_CASE("unchanged: beyond the kept samples the first stretch that differs is named", "[judge]") {
    const Plan plan = a_plan();
    const auto at = [&](std::size_t bad, std::size_t blocks, std::size_t step = 256) {
        auto response = right(plan);
        response[bad] ^= 1;
        const RuleVerdict verdict = verdict_on(plan, response, kept, blocks, std::nullopt, step);
        CHECK(verdict.verdict == Verdict::fail);
        CHECK_FALSE(verdict.first_bad);
        REQUIRE(verdict.figures.size() == 1);
        CHECK_FALSE(verdict.figures[0].value);
        CHECK_FALSE(verdict.figures[0].passed());
        CHECK(verdict.figures[0].note == "beyond the kept samples");
        return verdict.reason;
    };
    const std::string tail = ", of which the baseline keeps only a hash";
    const std::string head = "the first difference from " + run + " lies in samples ";
    // Stretches of 256: the one of 768 to 1023 is kept in part, the last one is 2816 to 2999.
    CHECK(at(kept, block) == head + "1000 to 1023" + tail);
    CHECK(at(1023, block) == head + "1000 to 1023" + tail);
    CHECK(at(1024, block) == head + "1024 to 1279" + tail);
    for (const std::size_t step : {1U, 100U, 256U, 5000U})
        CHECK(at(length - 1, block, step) == head + "2816 to 2999" + tail);
    // Without stretches the hash alone fails it.
    CHECK(at(kept, 0) == "the hash of the response differs from that of " + run +
                             ", of which the baseline keeps the first 1000 samples");
    CHECK(at(length - 1, 0).rfind("the hash of the response differs", 0) == 0);
}

TEST_CASE("unchanged: the first of several stretches that differ is the one named", "[judge]") {
    const Plan plan = a_plan();
    auto response = right(plan);
    response[1500] += 1;
    response[2500] += 1;
    CHECK(verdict_on(plan, response, kept, block).reason.find("lies in samples 1280 to 1535,") != std::string::npos);
}

TEST_CASE("unchanged: the channel of the first difference is in the reason", "[judge]") {
    const Plan plan = a_plan(2);
    auto response = right(plan);
    response[2 * 40 + 1] += 1;
    response[2 * 41] += 5;
    const RuleVerdict verdict = verdict_on(plan, response, length, 0);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.channel == 0);
    CHECK(verdict.reason ==
          "2 of 3000 samples differ from " + run + ", by up to 5 LSB; the first difference is in channel 2");
    CHECK(verdict.first_bad->index == 40);
    CHECK(verdict.first_bad->response[4] == response[2 * 40 + 1]);
    CHECK(verdict.first_bad->reference[4] == response[2 * 40 + 1] - 1);
    // Two channels that are off in one instant are one changed sample.
    response[2 * 40] += 1;
    const RuleVerdict both = verdict_on(plan, response, length, 0);
    CHECK(*both.figures[0].value == 2.0);
    CHECK(both.reason.ends_with("in channel 1"));
}

TEST_CASE("unchanged: swapped channels are a change", "[judge]") {
    Plan plan = a_plan(2);
    FilterStage right_only;
    right_only.design = MovingAverage{4};
    right_only.channels = {2};
    plan.filter.push_back(right_only);
    auto response = right(plan);
    for (std::size_t n = 0; n < response.size(); n += 2) std::swap(response[n], response[n + 1]);
    CHECK(verdict_on(plan, response, 0, 0).verdict == Verdict::fail);
}

TEST_CASE("unchanged: a limit in LSB decides on both of its sides", "[judge]") {
    const Plan plan = a_plan();
    auto response = right(plan);
    response[100] += 1;
    response[200] -= 2;
    const RuleVerdict inside = verdict_on(plan, response, length, 0, 2.0);
    CHECK(inside.verdict == Verdict::pass);
    CHECK(inside.reason == "2 of 3000 samples differ from " + run + ", by up to 2 LSB");
    CHECK(inside.figures[0].name == "max");
    CHECK(inside.figures[0].unit == "LSB");
    CHECK(*inside.figures[0].value == 2.0);
    CHECK(*inside.figures[0].margin == 0.0);
    CHECK_FALSE(inside.first_bad);
    const RuleVerdict outside = verdict_on(plan, response, length, 0, 1.999);
    CHECK(outside.verdict == Verdict::fail);
    CHECK(outside.first_bad->index == 200);  // the first one beyond the limit
    CHECK(*outside.figures[0].margin == -0.001);
    // A limit of 0 is bit for bit.
    CHECK(verdict_on(plan, response, length, 0, 0.0).figures[0].name == "changed samples");
    CHECK(verdict_on(plan, right(plan), kept, block, 2.0).reason == "every sample equals " + run);
}

TEST_CASE("unchanged: within a limit, what lies beyond the kept samples is never passed on trust", "[judge]") {
    const Plan plan = a_plan();
    auto response = right(plan);
    response[100] += 1;
    // Stretches beyond the kept samples are equal: all differences are seen.
    CHECK(verdict_on(plan, response, kept, 250, 1.0).verdict == Verdict::pass);
    // Without them nothing shows that.
    const RuleVerdict unseen = verdict_on(plan, response, kept, 0, 1.0);
    CHECK(unseen.verdict == Verdict::undecided);
    CHECK(unseen.reason == "1 of the first 1000 samples, which the baseline keeps, differs from " + run +
                               ", by 1 LSB; beyond the first 1000 samples the baseline keeps only hashes, which "
                               "differ: by how much cannot be told");
    response[2000] += 1;
    const RuleVerdict beyond = verdict_on(plan, response, kept, 250, 1.0);
    CHECK(beyond.verdict == Verdict::undecided);
    CHECK(beyond.reason.ends_with("which differ first in samples 2000 to 2249: by how much cannot be told"));
    response[100] += 1;
    CHECK(verdict_on(plan, response, kept, 250, 1.0).verdict == Verdict::fail);
}

TEST_CASE("unchanged: differences from one end of the codes to the other do not overflow", "[judge]") {
    Plan plan = a_plan();
    plan.signal.output = *sample_format("q31");
    plan.signal.input = *sample_format("q31");
    const Case blank = noise_case(plan);
    std::vector<Code> low(length, std::numeric_limits<Code>::min());
    const Case the_case = noise_case(plan, {unchanged_rule(accepted(plan, blank, low, length), 1.0)});
    const std::vector<Code> high(length, std::numeric_limits<Code>::max());
    const RuleVerdict verdict = judge(plan, the_case, high).rules[0];
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.reason == "3000 of 3000 samples differ from " + run + ", by up to 4294967295 LSB");
}

TEST_CASE("unchanged: bits of f32 are compared, so that NaN equals NaN and -0 is not 0", "[judge]") {
    Plan plan = a_plan();
    plan.signal.output = *sample_format("f32");
    plan.signal.input = *sample_format("f32");
    const Case blank = noise_case(plan);
    auto response = right(plan);
    response[7] = 0x7fc00000;
    response[8] = 0;
    const Case the_case = noise_case(plan, {unchanged_rule(accepted(plan, blank, response, length))});
    CHECK(judge(plan, the_case, response).rules[0].verdict == Verdict::pass);
    response[8] = std::numeric_limits<Code>::min();
    const RuleVerdict verdict = judge(plan, the_case, response).rules[0];
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.reason == "1 of 3000 samples differs from " + run);
    CHECK(verdict.first_bad->index == 8);
}

TEST_CASE("unchanged: without a baseline it is undecided and says what is missing", "[judge]") {
    const Plan plan = a_plan();
    UnchangedRule rule;
    rule.missing = "no baseline yet at baseline/: accept a good run with halflsb accept RUN";
    const CaseJudgement judgement = judge(plan, noise_case(plan, {{rule, {}}}), right(plan));
    CHECK(judgement.rules[0].verdict == Verdict::undecided);
    CHECK(judgement.rules[0].reason == rule.missing);
    rule.missing.clear();
    CHECK(judge(plan, noise_case(plan, {{rule, {}}}), right(plan)).rules[0].reason ==
          "there is no accepted run of this case");
}

TEST_CASE("unchanged: a baseline of another length or stimulus is no reference", "[judge]") {
    const Plan plan = a_plan();
    const auto good = right(plan);
    const RuleVerdict shorter = verdict_on(plan, std::vector<Code>(good.begin(), good.end() - 1), kept, block);
    CHECK(shorter.verdict == Verdict::undecided);
    CHECK(shorter.reason ==
          "this response has 2999 samples and that of " + run + " has 3000, so they cannot be compared");
    auto longer = good;
    longer.push_back(0);
    CHECK(verdict_on(plan, longer, kept, block).verdict == Verdict::undecided);
    const RuleVerdict other = verdict_on(plan, good, kept, block, std::nullopt,
                                         [](AcceptedResponse& baseline) { baseline.stimulus_sha256 = "1"; });
    CHECK(other.verdict == Verdict::undecided);
    CHECK(other.reason == "the stimulus is not that of " + run);
}

TEST_CASE("unchanged: a baseline that contradicts itself neither passes nor blames the board", "[judge]") {
    const Plan plan = a_plan();
    const auto good = right(plan);
    const auto reason = [&](std::size_t keeps, std::size_t blocks, auto edit) {
        for (const std::optional<double> limit : {std::optional<double>{}, std::optional<double>{5.0}}) {
            const RuleVerdict verdict = verdict_on(plan, good, keeps, blocks, limit, edit);
            CHECK(verdict.verdict == Verdict::undecided);
        }
        return verdict_on(plan, good, keeps, blocks, std::nullopt, edit).reason;
    };
    const std::string head = "the baseline contradicts itself: ", tail = "; accept a good run again";
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.kept[17] += 1; }) ==
          head + "its hash is that of this response, but what it keeps of the samples is not" + tail);
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.block_sha256[5] = "1"; }) ==
          head + "its hash is that of this response, but what it keeps of the samples is not" + tail);
    CHECK(reason(length, 0, [](AcceptedResponse& b) { b.response_sha256 = "1"; }) ==
          head + "its hash is not that of this response, but all its samples are" + tail);
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.block_sha256.pop_back(); }) ==
          head + "3000 samples in stretches of 256, and 11 hashes of them" + tail);
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.block_samples = 0; }) ==
          head + "3000 samples in stretches of 0, and 12 hashes of them" + tail);
    CHECK(reason(length, 0, [](AcceptedResponse& b) { b.samples = 2999; }) ==
          head + "2999 samples of 1 channel, and 3000 codes kept of them" + tail);
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.response_sha256.clear(); }) ==
          "the baseline has no hash of this case" + tail);
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.stimulus_sha256.clear(); }) ==
          "the baseline has no hash of this case" + tail);
    CHECK(reason(kept, block, [](AcceptedResponse& b) { b.make_digest = nullptr; }) ==
          "the baseline has no hash of this case" + tail);
}

TEST_CASE("unchanged: codes kept of another number of channels are no reference", "[judge]") {
    const Plan plan = a_plan(2);
    const RuleVerdict verdict = verdict_on(plan, right(plan), kept, 0, std::nullopt,
                                           [](AcceptedResponse& baseline) { baseline.kept.pop_back(); });
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason ==
          "the baseline contradicts itself: 3000 samples of 2 channels, and 1999 codes kept of them; accept a good "
          "run again");
}

TEST_CASE("unchanged: an unknown filter is judged by it alone", "[judge]") {
    Plan plan = a_plan();
    const auto good = right(plan);
    const Case blank = noise_case(plan);
    const Rule rule = unchanged_rule(accepted(plan, blank, good, length));
    const std::vector<Rule> rules{test::rule(plan, "error", values({{"max_lsb", 0.5}})), rule,
                                  test::implicit_latency()};
    plan.filter.clear();
    plan.filter_is_unknown = true;
    const Case the_case = noise_case(plan, rules);
    const CaseJudgement judgement = judge(plan, the_case, good);
    CHECK_FALSE(judgement.latency_told);
    REQUIRE(judgement.rules.size() == 2);
    CHECK(judgement.rules[0].verdict == Verdict::undecided);
    CHECK(judgement.rules[0].reason == "the filter is unknown, so there is no reference");
    CHECK(judgement.rules[1].verdict == Verdict::pass);
    CHECK_FALSE(latency_evidence(plan, the_case).can_tell);

    auto late = test::delayed(good, 1);
    const CaseJudgement changed = judge(plan, noise_case(plan, {rule}), late);
    REQUIRE(changed.rules.size() == 1);
    CHECK(changed.rules[0].verdict == Verdict::fail);
}

TEST_CASE("unchanged: it stands in its place among the other rules and does not move with the lag", "[judge]") {
    const Plan plan = a_plan(2);
    const Case blank = noise_case(plan);
    const auto good = right(plan);
    const Rule error = test::rule(plan, "error", values({{"max_lsb", 0.5}}));
    const Case the_case =
        noise_case(plan, {error, unchanged_rule(accepted(plan, blank, good, kept, block)), test::implicit_latency()});
    const CaseJudgement same = judge(plan, the_case, good);
    REQUIRE(same.rules.size() == 5);
    CHECK(kind_name(same.rules[2].rule) == "unchanged");
    CHECK(verdict_of(same.rules) == CaseVerdict::pass);
    const CaseJudgement late = judge(plan, the_case, test::delayed(good, 1, 2));
    CHECK(late.rules[0].verdict == Verdict::pass);
    CHECK(late.rules[2].verdict == Verdict::fail);
    CHECK(late.rules[2].reason.find("measured lag") == std::string::npos);
    CHECK(late.rules[3].verdict == Verdict::fail);
}
