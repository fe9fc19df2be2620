// The rule headroom: what wraps and what clips, against what was declared.
#include "oracle/judge/headroom_judge.hpp"

#include <algorithm>
#include <catch2/catch.hpp>

#include "oracle/judge/admission.hpp"
#include "oracle/judge/headroom_reach.hpp"
#include "oracle/judge/off_samples.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

/// Two taps of 0.75: full scale of one sign comes to 1.5 and saturates.
Plan loud_plan(std::optional<Rounding> rounding = Rounding::half_up) {
    Plan plan = test::moving_average_plan();
    plan.filter[0].design = Fir{{0.75, 0.75}};
    plan.filter[0].kind = "fir";
    plan.filter[0].coefficient_fraction_bits = 14;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 14;
    plan.filter[0].arithmetic.rounding = rounding;
    return plan;
}

Case hardest(const Plan& plan, const ParameterValues& limits = {}, double level = 1.0) {
    return test::a_case(plan, "signs",
                        values({{"signs", std::string("++--+-++++")},
                                {"level_ratio", level},
                                {"at_samples", std::int64_t{5}},
                                {"length_samples", std::int64_t{40}}}),
                        {test::rule(plan, "headroom", limits)});
}

/// What each sum comes to, not cut off: in LSB.
std::vector<double> sums(const Plan& plan, const Case& the_case) {
    std::vector<Code> sent(static_cast<std::size_t>(the_case.stimulus->length_samples()));
    fill_case_codes(plan, the_case, 0, sent);
    std::vector<double> all;
    for (std::size_t n = 0; n < sent.size(); ++n) all.push_back(0.75 * (sent[n] + (n > 0 ? sent[n - 1] : 0)));
    return all;
}

template <class Word>
std::vector<Code> through(const Plan& plan, const Case& the_case, Word word) {
    std::vector<Code> codes;
    for (const double sum : sums(plan, the_case))
        codes.push_back(static_cast<Code>(word(static_cast<std::int64_t>(std::floor(sum + 0.5)))));
    return codes;
}

std::int64_t wrapped(std::int64_t sum) { return static_cast<std::int16_t>(sum); }
std::int64_t clipped_early(std::int64_t sum) { return std::clamp<std::int64_t>(sum, -20000, 20000); }

}  // namespace

TEST_CASE("headroom: a board that saturates as declared passes, and the driven node is named", "[judge]") {
    for (const auto rounding : {std::optional(Rounding::half_up), std::optional<Rounding>()}) {
        const Plan plan = loud_plan(rounding);
        const Case the_case = hardest(plan);
        CHECK(refusals(plan, the_case).empty());
        for (const std::size_t block : {1u, 3u, 256u}) {
            const RuleVerdict verdict = judge(plan, the_case, test::right_response(plan, the_case), block).rules.at(0);
            CHECK(verdict.verdict == Verdict::pass);
            CHECK(verdict.figures.at(0).value == 0.0);
            CHECK(verdict.figures.at(1).value == 0.0);
            CHECK(verdict.reason.rfind("of the worst that any input can do, the stimulus drives stage 1", 0) == 0);
            CHECK_FALSE(verdict.first_bad);
        }
    }
}

TEST_CASE("headroom: an output that wraps where it should saturate fails, sample by sample", "[judge]") {
    const Plan plan = loud_plan();
    const Case the_case = hardest(plan);
    std::int64_t over = 0;
    for (const double sum : sums(plan, the_case)) over += sum > 32767.0 || sum < -32768.0 ? 1 : 0;
    REQUIRE(over == 5);
    const RuleVerdict verdict = judge(plan, the_case, through(plan, the_case, wrapped)).rules.at(0);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.figures.at(1).name == "wrapped");
    CHECK(verdict.figures[1].value == over);
    CHECK(verdict.figures[0].value == 0.0);
    CHECK(judge(plan, hardest(plan, values({{"max_wrapped_samples", over}})), through(plan, the_case, wrapped))
              .rules.at(0)
              .verdict == Verdict::pass);
    CHECK(verdict.first_bad);
}

TEST_CASE("off samples: whole turns of a word are wrapped, of either sign", "[judge]") {
    const SampleFormat q15 = *sample_format("q15");
    const double lsb = lsb_value(q15);
    const auto told = [&](double value_lsb, double reference_lsb, double design_lsb = 0.0) {
        OffSamples samples(q15, {-lsb, lsb});
        for (const double each : {30000.0, -30000.0, value_lsb}) samples.add(each * lsb);
        samples.add_off(value_lsb * lsb, reference_lsb * lsb, design_lsb * lsb);
        return samples.wrapped() == 1 ? "wrapped" : samples.clipped() == 1 ? "clipped" : "other";
    };
    CHECK(std::string(told(-30000.0, 35536.0)) == "wrapped");
    CHECK(std::string(told(30000.0, -35536.0)) == "wrapped");
    CHECK(std::string(told(1000.0, 1000.0 + 4096.0)) == "wrapped");  // a sum of 16 points in 16 bits
    CHECK(std::string(told(1002.0, 1000.0 + 4096.0)) == "wrapped");  // within the ends of the error and an LSB
    CHECK(std::string(told(1003.0, 1000.0 + 4096.0)) == "other");
    CHECK(std::string(told(1000.0, 1064.0)) == "other");  // too small a jump
    // The reference saturated, the word went on and wrapped.
    CHECK(std::string(told(-20000.0, 32767.0, 45530.0)) == "wrapped");
    CHECK(std::string(told(-20000.0, 32767.0, 44000.0)) == "other");
    CHECK(std::string(told(30000.0, 30100.0)) == "clipped");
    CHECK(std::string(told(-30000.0, -30100.0)) == "clipped");
    CHECK(std::string(told(29999.0, 30099.0)) == "other");  // the response goes further elsewhere
    CHECK(std::string(told(30000.0, 29900.0)) == "other");  // beyond the reference, not short of it
}

TEST_CASE("off samples: one sample alone at an extreme is no clipping, but for the rail", "[judge]") {
    const SampleFormat q15 = *sample_format("q15");
    const double lsb = lsb_value(q15);
    for (const double top : {30000.0, 32767.0}) {
        OffSamples samples(q15, {-lsb, lsb});
        samples.add(100.0 * lsb);
        samples.add(top * lsb);
        samples.add_off(top * lsb, (top + 100.0) * lsb, 0.0);
        CHECK(samples.clipped() == (top == 32767.0 ? 1 : 0));
        CHECK(samples.others() == (top == 32767.0 ? 0 : 1));
    }
    // A word that ends as far down as up.
    for (const double bottom : {-30001.0, -30002.0}) {
        OffSamples both(q15, {-lsb, lsb});
        for (const double value : {30000.0, 30000.0, bottom}) {
            both.add(value * lsb);
            both.add_off(value * lsb, (value > 0.0 ? 31000.0 : -31000.0) * lsb, 0.0);
        }
        CHECK(both.clipped() == (bottom == -30001.0 ? 3 : 2));
    }
    // What stood at an extreme that is no longer one was not cut off.
    OffSamples samples(q15, {-lsb, lsb});
    for (int i = 0; i < 3; ++i) {
        samples.add(1000.0 * lsb);
        samples.add_off(1000.0 * lsb, 1100.0 * lsb, 0.0);
    }
    CHECK(samples.clipped() == 3);
    samples.add(1001.0 * lsb);
    CHECK(samples.clipped() == 0);
    CHECK(samples.others() == 3);
}

TEST_CASE("headroom: a node that clips early fails, both sides of how many may", "[judge]") {
    const Plan plan = loud_plan();
    const Case the_case = hardest(plan);
    const auto response = through(plan, the_case, clipped_early);
    const RuleVerdict verdict = judge(plan, the_case, response).rules.at(0);
    CHECK(verdict.verdict == Verdict::fail);
    const double count = *verdict.figures.at(0).value;
    CHECK(verdict.figures[0].name == "clipped");
    CHECK(count > 3.0);
    CHECK(verdict.figures.at(1).value == 0.0);
    REQUIRE(verdict.first_bad);
    for (const std::int64_t allowed : {static_cast<std::int64_t>(count), static_cast<std::int64_t>(count) - 1}) {
        const Case with_limit = hardest(plan, values({{"max_clipped_samples", allowed}}));
        const RuleVerdict again = judge(plan, with_limit, response).rules.at(0);
        INFO(count << " clipped, " << allowed << " allowed: " << again.reason);
        CHECK((again.verdict == Verdict::pass) == (allowed == static_cast<std::int64_t>(count)));
    }
}

TEST_CASE("headroom: a running sum that is as narrow as a sample wraps", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.filter[0].arithmetic.rounding = Rounding::floor;
    const Case the_case =
        test::a_case(plan, "step", values({{"level_ratio", 1.0}, {"length_samples", std::int64_t{64}}}),
                     {test::rule(plan, "headroom", {})});
    CHECK(refusals(plan, the_case).empty());
    std::vector<Code> response;
    std::int16_t sum = 0;
    for (int n = 0; n < 64; ++n) {
        sum = static_cast<std::int16_t>(sum + (n < 16 ? 32767 : 0));
        response.push_back(sum >> 4);
    }
    const RuleVerdict verdict = judge(plan, the_case, response).rules.at(0);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(*verdict.figures.at(1).value > 50.0);
}

// The response of such a sum may fit another lag best, and a plan that says no arithmetic has no twin to wait for it.
TEST_CASE("headroom: at another lag it is judged without a twin, too", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.filter[0].arithmetic = {};
    const Case the_case =
        test::a_case(plan, "noise", values({{"level_ratio", 1.0}, {"length_samples", std::int64_t{2048}}}),
                     {test::rule(plan, "headroom", {}),
                      test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}}))});
    std::vector<Code> response = test::right_response(plan, the_case);
    // As late as is looked for.
    response.insert(response.begin(), 64, 0);
    response.resize(2048);
    const auto rules = judge(plan, the_case, response).rules;
    CHECK(rules.at(0).verdict == Verdict::pass);
    CHECK(rules.at(1).verdict == Verdict::fail);
}

TEST_CASE("headroom: another fault is left to the rules that say what it is", "[judge]") {
    const Plan plan = loud_plan();
    const Case the_case = hardest(plan);
    auto response = test::right_response(plan, the_case);
    response[7] -= 40;
    const RuleVerdict verdict = judge(plan, the_case, response).rules.at(0);
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason == "1 sample errs otherwise than by clipping or wrapping; rules error and exact say what");
}

TEST_CASE("headroom: a stimulus that drives nothing is refused, with what would", "[judge]") {
    const Plan plan = loud_plan();
    const auto found = refusals(plan, hardest(plan, {}, 0.5));
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem.find("drives no node of the filter to its worst: shape = \"signs\" drives stage 1") !=
          std::string::npos);
    CHECK(found[0].problem.find("to 50 % of the worst that any input can do, and 90 % are needed") !=
          std::string::npos);
    CHECK(found[0].remedy.rfind("use shape = \"signs\" at level_ratio = 1.0", 0) == 0);
    // Both sides of 0.9.
    CHECK(refusals(plan, hardest(plan, {}, 0.901)).empty());
    CHECK(refusals(plan, hardest(plan, {}, 0.899)).size() == 1);
}

TEST_CASE("headroom: what has no hardest stimulus is refused", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.filter[0].design = Median{3};
    plan.filter[0].kind = "median";
    auto found = refusals(plan, hardest(plan));
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "nobody knows which stimulus drives a node the hardest: a median has no impulse response");
    plan = loud_plan();
    plan.signal.input = *sample_format("f32");
    const Case of_floats =
        test::a_case(plan, "step", values({{"length_samples", std::int64_t{64}}}), {test::rule(plan, "headroom", {})});
    found = refusals(plan, of_floats);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem.find("an f32 input has no largest code") != std::string::npos);
}
