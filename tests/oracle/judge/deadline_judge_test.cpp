// The rule deadline: the board's ticks against limits.
#include "oracle/judge/deadline_judge.hpp"

#include <catch2/catch.hpp>
#include <numeric>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

constexpr TickCounter counter{168'000'000, 32};

Case step(const Plan& plan, const ParameterValues& limits, std::int64_t length = 1600) {
    return test::a_case(plan, "step", values({{"level_ratio", 0.5}, {"length_samples", length}}),
                        {test::rule(plan, "deadline", limits)});
}

/// 100 blocks of 16 samples of 30 ticks each, no sample above another.
std::vector<BlockTicks> steady(std::int64_t blocks = 100) {
    return std::vector<BlockTicks>(static_cast<std::size_t>(blocks), {16, 480, 30});
}

RuleVerdict judged(const ParameterValues& limits, const std::vector<BlockTicks>& blocks,
                   const TickCounter& with = counter) {
    const Plan plan = test::moving_average_plan();
    const Case the_case = step(plan, limits,
                               std::accumulate(blocks.begin(), blocks.end(), std::int64_t{blocks.empty() ? 16 : 0},
                                               [](auto sum, const auto& b) { return sum + b.samples; }));
    DeadlineJudge judge(plan, the_case, the_case.rules.front());
    // In two parts, as they come.
    const std::size_t half = blocks.size() / 2;
    judge.add(with, std::span(blocks).first(half));
    judge.add(with, std::span(blocks).subspan(half));
    RuleVerdict verdict = judge.verdict();
    verdict.rule = {};  // the case is gone
    return verdict;
}

const JudgedFigure& figure(const RuleVerdict& verdict, const std::string& name) {
    for (const JudgedFigure& each : verdict.figures) {
        if (each.name == name) return each;
    }
    FAIL("no figure " << name);
    return verdict.figures.front();
}

}  // namespace

TEST_CASE("deadline: the largest, both sides of its limit", "[judge]") {
    const RuleVerdict within = judged(values({{"max_ticks", 30.0}}), steady());
    CHECK(within.verdict == Verdict::pass);
    CHECK(figure(within, "largest").value == 30.0);
    CHECK(figure(within, "largest").margin == 0.0);
    CHECK(figure(within, "50 % of blocks").value == Approx(30.0).epsilon(1.0 / 512.0));
    CHECK(within.reason ==
          "the board times whole blocks, of up to 16 samples: what is told of a sample is the mean of "
          "its block");
    auto blocks = steady();
    blocks[70] = {16, 490, 31};
    const RuleVerdict beyond = judged(values({{"max_ticks", 30.0}}), blocks);
    CHECK(beyond.verdict == Verdict::fail);
    CHECK(figure(beyond, "largest").value == 31.0);
    CHECK(beyond.reason.rfind("the slowest block is samples 1120 to 1135; ", 0) == 0);
}

TEST_CASE("deadline: a board that times each sample is not said to time blocks", "[judge]") {
    auto blocks = steady();
    blocks[3] = {16, 600, 150};
    const RuleVerdict verdict = judged(values({{"max_ticks", 200.0}}), blocks);
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(verdict.reason.empty());
    CHECK(figure(verdict, "largest").value == 150.0);
}

TEST_CASE("deadline: a share of the sample period, both sides", "[judge]") {
    // 168 MHz over 1200 Hz is 140,000 ticks.
    auto blocks = steady();
    blocks[0] = {16, 140'000 * 8 * 16, 140'000 * 8};
    CHECK(judged(values({{"max_period_ratio", 8.0}}), blocks).verdict == Verdict::pass);
    const RuleVerdict late = judged(values({{"max_period_ratio", 7.99}}), blocks);
    CHECK(late.verdict == Verdict::fail);
    CHECK(figure(late, "longest").value == 8.0);
    CHECK(figure(late, "longest").unit == "of the sample period");
}

TEST_CASE("deadline: a percentile is counted, at its exact rank", "[judge]") {
    for (const std::size_t slow : {0u, 1u, 2u, 3u}) {
        auto blocks = steady();
        // 40.0625 ticks a sample.
        for (std::size_t i = 0; i < slow; ++i) blocks[10 * i] = {16, 641, 41};
        const RuleVerdict verdict = judged(values({{"percentile", 98.0}, {"max_percentile_ticks", 40.0}}), blocks);
        INFO(slow << " of 100 are slow");
        CHECK((verdict.verdict == Verdict::pass) == (slow <= 2));
        const JudgedFigure& told = figure(verdict, "98 % of blocks");
        CHECK(*told.value == Approx(slow <= 2 ? 30.0 : 40.0625).epsilon(1.0 / 512.0));
        CHECK((*told.value <= 40.0) == (slow <= 2));
        CHECK(told.note == (slow == 0 ? "" : std::to_string(slow) + " of 100 beyond"));
        CHECK_FALSE(figure(verdict, "largest").limit);
    }
}

TEST_CASE("deadline: what is told stands on the side of the limit that was counted", "[judge]") {
    // A mean of 1000 ticks and the limit lie in one bin of the histogram.
    std::vector<BlockTicks> blocks(100, {1, 1000, 1000});
    const RuleVerdict fails = judged(values({{"percentile", 50.0}, {"max_percentile_ticks", 999.5}}), blocks);
    CHECK(fails.verdict == Verdict::fail);
    CHECK(*figure(fails, "50 % of blocks").value > 999.5);
    const RuleVerdict passes = judged(values({{"percentile", 50.0}, {"max_percentile_ticks", 1000.0}}), blocks);
    CHECK(passes.verdict == Verdict::pass);
    CHECK(*figure(passes, "50 % of blocks").value <= 1000.0);
}

TEST_CASE("deadline: what cannot be judged is undecided, with the reason", "[judge]") {
    const auto limits = values({{"max_ticks", 30.0}});
    const auto reason = [&](const std::vector<BlockTicks>& blocks, const TickCounter& with = counter) {
        const RuleVerdict verdict = judged(limits, blocks, with);
        CHECK(verdict.verdict == Verdict::undecided);
        CHECK(verdict.figures.empty());
        return verdict.reason;
    };
    CHECK(reason({}) == "the run kept no ticks of this case; capture anew with halflsb check");
    CHECK(reason(steady(), {0, 0}).rfind("the board has no tick counter", 0) == 0);
    CHECK(reason({{16, 0, 0}, {16, 0, 0}}).rfind("the board's tick counter stands still", 0) == 0);
    CHECK(reason({{16, 480, 30}, {16, 481, 30}}).rfind("the board contradicts itself: in 1 of 2 blocks", 0) == 0);
    const Plan plan = test::moving_average_plan();
    const Case the_case = step(plan, limits);
    DeadlineJudge judge(plan, the_case, the_case.rules.front());
    judge.add(counter, steady(99));
    CHECK(judge.verdict().reason ==
          "the ticks of 1584 samples are there, and the stimulus has 1600; capture anew with halflsb check");
}

TEST_CASE("deadline: a counter that would wrap within the limit cannot pass, but can fail", "[judge]") {
    // 16 samples of 4096 ticks are 2^16.
    const TickCounter narrow{1'000'000, 16};
    CHECK(judged(values({{"max_ticks", 4095.0}}), steady(), narrow).verdict == Verdict::pass);
    const RuleVerdict doubtful = judged(values({{"max_ticks", 4096.0}}), steady(), narrow);
    CHECK(doubtful.verdict == Verdict::undecided);
    CHECK(figure(doubtful, "largest").note ==
          "a block that takes longer than the limit wraps the board's counter of 16 bits; use smaller blocks or a "
          "slower counter");
    auto blocks = steady();
    blocks[5] = {16, 65535, 5000};
    CHECK(judged(values({{"max_ticks", 4096.0}}), blocks, narrow).verdict == Verdict::fail);
}

TEST_CASE("deadline: the most that a board can tell is no measured number", "[judge]") {
    auto blocks = steady();
    blocks[5] = {16, 4'000'000'000, most_ticks_told};
    CHECK(judged(values({{"max_ticks", 16'000'000.0}}), blocks).verdict == Verdict::fail);
    // A period of 16.8 million ticks at 10 Hz would do it; here 140,000 of them, 120 periods.
    const RuleVerdict verdict = judged(values({{"max_period_ratio", 120.0}}), blocks);
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(figure(verdict, "longest").note == "16777215 ticks, or more: a board tells no larger number");
}

TEST_CASE("deadline: a case asks for ticks, and is judged with the other rules", "[judge]") {
    const Plan plan = test::moving_average_plan();
    Case the_case = step(plan, values({{"max_ticks", 30.0}}));
    CHECK(wants_ticks(the_case));
    the_case.rules.insert(the_case.rules.begin(), test::rule(plan, "error", values({{"max_lsb", 0.5}})));
    CaseJudge judge(plan, the_case);
    judge.add(test::right_response(plan, the_case));
    judge.add_ticks(counter, steady());
    const auto judgement = judge.finish([](std::int64_t, std::span<Code>) -> Outcome<void> { return {}; });
    REQUIRE(judgement);
    REQUIRE(judgement->rules.size() == 2);
    CHECK(judgement->rules[1].verdict == Verdict::pass);
    CHECK(judgement->rules[1].channel == 0);
    the_case.rules.pop_back();
    CHECK_FALSE(wants_ticks(the_case));
}

TEST_CASE("block ticks: kept as codes and back, to the last bit", "[judge]") {
    const std::vector<BlockTicks> blocks{{16, 480, 30}, {1, 0xFFFFFFFF, most_ticks_told}, {65535, 0, 0}};
    CHECK(ticks_of_codes(codes_of_ticks(blocks)) == blocks);
}
