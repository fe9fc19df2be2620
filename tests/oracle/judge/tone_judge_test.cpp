// The rule tone: both sides of its limits, and what leaves it undecided.
#include "oracle/judge/tone_judge.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

#include "tests/oracle/judge/judging.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using halflsb::testing::Gaussian;
using halflsb::testing::is_binomial;

namespace {

/// 30 Hz at 1200 Hz is coherent and repeats; 30.7 Hz does so only after 12 000 samples.
Case sine_case(const Plan& plan, const ParameterValues& limits, double frequency_hz = 30.0,
               std::int64_t length = 4096) {
    return a_case(plan, "sine",
                  values({{"frequency_hz", frequency_hz}, {"level_ratio", 0.9}, {"length_samples", length}}),
                  {rule(plan, "tone", limits)});
}

ParameterValues all_limits(double sinad, double enob, double thd, double sfdr) {
    return values({{"min_sinad_db", sinad}, {"min_enob_bits", enob}, {"max_thd_db", thd}, {"min_sfdr_db", sfdr}});
}

RuleVerdict verdict_on(const Plan& plan, const Case& the_case, const std::vector<Code>& response,
                       std::size_t block = 256) {
    const CaseJudgement judgement = judge(plan, the_case, response, block);
    REQUIRE(judgement.rules.size() == 1);
    return judgement.rules.front();
}

std::vector<Code> with_noise(std::vector<Code> response, double deviation, Gaussian& normal) {
    for (Code& code : response) code += static_cast<Code>(std::lround(deviation * normal.next()));
    return response;
}

}  // namespace

TEST_CASE("tone: a right board passes, and each limit has two sides", "[judge]") {
    const Plan plan = moving_average_plan();
    for (const double frequency_hz : {30.0, 30.7}) {
        INFO(frequency_hz);
        const Case easy = sine_case(plan, all_limits(85.0, 14.0, -85.0, 85.0), frequency_hz);
        const auto response = right_response(plan, easy);
        const RuleVerdict passed = verdict_on(plan, easy, response);
        CHECK(passed.verdict == Verdict::pass);
        CHECK(passed.reference.empty());
        CHECK(passed.reason.empty());
        REQUIRE(passed.figures.size() == 4);
        const bool repeats = frequency_hz == 30.0;
        for (std::size_t i = 0; i < 4; ++i) {
            const JudgedFigure& figure = passed.figures[i];
            INFO(figure.name);
            REQUIRE(figure.value);
            CHECK(figure.uncertainty.has_value() == !repeats);
            CHECK(figure.at_least == (figure.name != "thd"));
            // A limit on either side of the value, further off than the figure may be: alpha / 4 and beta.
            const double u = figure.uncertainty.value_or(0.0), inside = 3.2 * u + 1e-6, outside = 6.0 * u + 1e-6;
            const double sign = figure.at_least ? 1.0 : -1.0;
            for (const bool beyond : {false, true}) {
                std::vector<double> limits{85.0, 14.0, -85.0, 85.0};
                limits[i] = *figure.value + sign * (beyond ? outside : -inside);
                const Case near = sine_case(plan, all_limits(limits[0], limits[1], limits[2], limits[3]), frequency_hz);
                const RuleVerdict verdict = verdict_on(plan, near, response);
                // A tone whose largest line is one of noise is not failed by it.
                const bool may_be_open = beyond && !repeats && (figure.name == "sfdr" || figure.name == "thd");
                if (may_be_open) {
                    CHECK(verdict.figures[i].verdict != Verdict::pass);
                } else {
                    CHECK(verdict.figures[i].verdict == (beyond ? Verdict::fail : Verdict::pass));
                }
            }
        }
        // Blocks of any size give the same figures.
        CHECK(verdict_on(plan, easy, response, 7).figures[0].value == passed.figures[0].value);
    }
}

TEST_CASE("tone: a distorted sine fails THD and SINAD, at the value that the distortion has", "[judge]") {
    const Plan plan = moving_average_plan(1);
    const Case the_case = sine_case(plan, all_limits(60.0, 8.0, -60.0, 60.0));
    auto response = right_response(plan, the_case);
    // x - x^3 / 100 of a sine of amplitude a: a third harmonic of a^3 / 400 beside a - 3 a^3 / 400, 0.9 of full scale.
    for (Code& code : response) {
        const double x = code / 32768.0;
        code = static_cast<Code>(std::lround(32768.0 * (x - 0.01 * x * x * x)));
    }
    const RuleVerdict verdict = verdict_on(plan, the_case, response);
    CHECK(verdict.verdict == Verdict::fail);
    const double third = std::pow(0.9, 3) / 400.0, first = 0.9 - 3.0 * third;
    CHECK(*verdict.figures[2].value == Approx(20.0 * std::log10(third / first)).margin(0.05));
    CHECK(verdict.figures[2].verdict == Verdict::fail);
    CHECK(verdict.figures[2].note == "harmonics 2 to 10");
    CHECK(verdict.figures[3].verdict == Verdict::fail);
    CHECK(verdict.figures[3].note == "to 90 Hz");
}

TEST_CASE("tone: what noise shows in THD and SFDR is no distortion", "[judge]") {
    const Plan plan = moving_average_plan(1);
    const Case the_case = sine_case(plan, values({{"max_thd_db", -90.0}, {"min_sfdr_db", 90.0}}));
    Gaussian normal(77);
    const RuleVerdict verdict = verdict_on(plan, the_case, with_noise(right_response(plan, the_case), 300.0, normal));
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.figures[0].note.starts_with("noise alone would show -"));
    CHECK(verdict.figures[1].note.starts_with("the largest line, at "));
    CHECK(verdict.figures[1].note.ends_with(" is no larger than noise shows"));
    CHECK(verdict.reason.starts_with("2 figures too near a limit to tell from 4096 samples; "));
}

TEST_CASE("tone: near its limit it is undecided, with the samples that would tell", "[judge]") {
    const Plan plan = moving_average_plan(1);
    // 60 dB below a sine of 0.9: 0.9 x 32768 / sqrt 2 / 1000 codes of noise.
    const double deviation = 0.9 * 32768.0 / std::sqrt(2.0) / 1000.0;
    const Case the_case = sine_case(plan, values({{"min_sinad_db", 59.9}}));
    Gaussian normal(5);
    const RuleVerdict verdict =
        verdict_on(plan, the_case, with_noise(right_response(plan, the_case), deviation, normal));
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason.starts_with("1 figure too near a limit to tell from 4096 samples; "));
}

TEST_CASE("tone: what cannot be measured is undecided, never failed", "[judge]") {
    const Plan plan = moving_average_plan();
    const Case the_case = sine_case(plan, all_limits(60.0, 8.0, -60.0, 60.0));
    const auto right = right_response(plan, the_case);
    auto clipped = right;
    clipped[700] = 32767;
    CHECK(verdict_on(plan, the_case, clipped).verdict == Verdict::undecided);
    CHECK(verdict_on(plan, the_case, clipped).reason.starts_with("1 sample stands at the end of the output's range"));
    const RuleVerdict silent = verdict_on(plan, the_case, std::vector<Code>(right.size(), 0));
    CHECK(silent.verdict == Verdict::undecided);
    CHECK(
        silent.reason ==
        "the tone of 30 Hz cannot be judged: no tone stands out at the frequency; a rule of kind \"error\" shows what "
        "came back");
    CHECK(silent.figures.empty());

    Plan floats = plan;
    floats.signal.input = floats.signal.output = *sample_format("f32");
    const Case of_floats = sine_case(floats, values({{"min_sinad_db", 60.0}}));
    auto response = right_response(floats, of_floats);
    CHECK(verdict_on(floats, of_floats, response).verdict == Verdict::pass);
    response[1234] = 0x7fc00000;
    CHECK(verdict_on(floats, of_floats, response).verdict == Verdict::undecided);
}

TEST_CASE("tone: a sine without any residual passes", "[judge]") {
    Plan plan = moving_average_plan(1);
    plan.signal.input = plan.signal.output = *sample_format("f32");
    // 1/4 of the rate: 0, 1, 0, -1, which are floats.
    const Case the_case = sine_case(plan, all_limits(200.0, 30.0, -200.0, 200.0), 300.0, 256);
    std::vector<Code> response;
    for (std::size_t n = 0; n < 256; ++n)
        response.push_back(code_of(plan.signal.output, std::array{0.0, 0.5, 0.0, -0.5}[n % 4], Rounding::half_up));
    const RuleVerdict verdict = verdict_on(plan, the_case, response);
    CHECK(verdict.verdict == Verdict::pass);
    for (const JudgedFigure& figure : verdict.figures) {
        CHECK_FALSE(figure.value);
        CHECK(figure.note == "no residual");
    }
}

TEST_CASE("tone: the filter's start is left out, and nothing after it", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto given = values({{"frequency_hz", 30.0},
                               {"level_ratio", 0.9},
                               {"at_samples", std::int64_t{100}},
                               {"length_samples", std::int64_t{4096}}});
    Case the_case = a_case(plan, "sine", given, {rule(plan, "tone", values({{"min_sinad_db", 80.0}}))});
    // 15 samples after the start the window of 16 points has nothing of the silence left.
    const auto window = tone_window(plan, the_case, 1, 0);
    REQUIRE(window);
    CHECK(window->begin == 115);
    CHECK(window->end == 4096);
    CHECK(tone_window(plan, the_case, 1, 3)->begin == 118);
    CHECK(tone_window(plan, the_case, 1, -3)->end == 4093);
    auto response = right_response(plan, the_case);
    for (std::size_t n = 0; n < 115; ++n) response[n] = 12345;
    CHECK(verdict_on(plan, the_case, response).verdict == Verdict::pass);
    response[115] -= 3000;
    CHECK(verdict_on(plan, the_case, response).verdict == Verdict::fail);
    the_case.start = Start::running;
    the_case.start_samples = 1000;
    CHECK(tone_window(plan, the_case, 1, 0)->begin == 1000);
    // A longer stimulus is judged at its end.
    const Case longest = sine_case(plan, values({{"min_sinad_db", 80.0}}), 30.0, 3'000'000'000);
    CHECK(tone_window(plan, longest, 1, 0)->begin == 3'000'000'000 - (1 << 20));
    CHECK(tone_window(plan, longest, 1, 0)->samples() == 1 << 20);
}

TEST_CASE("tone: a board that is late is judged where its response lies", "[judge]") {
    const Plan plan = moving_average_plan();
    Case the_case = sine_case(plan, values({{"min_sinad_db", 80.0}}), 30.7);
    the_case.rules.push_back(implicit_latency());
    const CaseJudgement judgement = judge(plan, the_case, delayed(right_response(plan, the_case), 5));
    CHECK(judgement.rules[0].verdict == Verdict::pass);
    CHECK(judgement.rules[0].reason == "judged at the measured lag of 5 samples");
}

TEST_CASE("tone: a channel that is not driven says nothing", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.channels = 2;
    Case the_case = sine_case(plan, values({{"min_sinad_db", 80.0}}));
    the_case.channel = 2;
    const CaseJudgement judgement = judge(plan, the_case, right_response(plan, the_case));
    REQUIRE(judgement.rules.size() == 1);
    CHECK(judgement.rules[0].channel == 2);
    CHECK(judgement.rules[0].verdict == Verdict::pass);
}

TEST_CASE("tone: behind a decimator frequencies are those of what comes back", "[judge]") {
    Plan plan = moving_average_plan();
    FilterStage stage;
    stage.design = FirDecimator{{0.25, 0.25, 0.25, 0.25}, 4};
    plan.filter = {stage};
    const Case the_case = sine_case(plan, all_limits(80.0, 13.0, -80.0, 80.0), 30.7, 16384);
    CHECK(*lone_tone(plan, the_case) == Approx(30.7 / 300.0));
    const RuleVerdict verdict = verdict_on(plan, the_case, right_response(plan, the_case));
    CHECK(verdict.verdict == Verdict::pass);
}

TEST_CASE("tone: a level under the sine is no distortion", "[judge]") {
    const Plan plan = moving_average_plan();
    auto given = values({{"frequency_hz", 30.7}, {"level_ratio", 0.4}, {"length_samples", std::int64_t{4096}}});
    given.set("add", std::make_shared<const std::vector<StimulusWords>>(std::vector<StimulusWords>{
                         {"step", values({{"level_ratio", 0.5}, {"at_samples", std::int64_t{20}}})}}));
    const Case the_case = a_case(plan, "sine", given, {rule(plan, "tone", values({{"min_sinad_db", 80.0}}))});
    CHECK(tone_window(plan, the_case, 1, 0)->begin == 35);
    CHECK(verdict_on(plan, the_case, right_response(plan, the_case)).verdict == Verdict::pass);
}

TEST_CASE("tone: a record repeats when its sine does and nothing else is in it", "[judge]") {
    std::vector<double> record;
    for (int n = 0; n < 200; ++n)
        record.push_back(std::round(100.0 * std::sin(2.0 * std::numbers::pi * (n % 40) / 40)));
    CHECK(is_repeating(record, 1.0 / 40.0));
    CHECK_FALSE(is_repeating(record, 1.0 / 40.1));
    CHECK_FALSE(is_repeating(std::vector(record.begin(), record.begin() + 79), 1.0 / 40.0));
    record[100] += 1.0;
    CHECK_FALSE(is_repeating(record, 1.0 / 40.0));
}

TEST_CASE("tone: right boards with noise fail as seldom as alpha says", "[judge]") {
    Plan plan = moving_average_plan(1);
    plan.certainty.alpha = 0.05;
    const double deviation = 0.9 * 32768.0 / std::sqrt(2.0) / 1000.0;
    // On its limit: 60 dB. No harmonic at all: whatever THD or SFDR asks, noise is none.
    const Case the_case =
        sine_case(plan, values({{"min_sinad_db", 60.0}, {"max_thd_db", -120.0}, {"min_sfdr_db", 200.0}}), 30.7, 600);
    const auto right = right_response(plan, the_case);
    const std::uint64_t seed = 20261203;
    INFO("seed " << seed);
    Gaussian normal(seed);
    const int rounds = rounds_of(2000);
    int sinad = 0, thd = 0, sfdr = 0;
    for (int round = 0; round < rounds; ++round) {
        const RuleVerdict verdict = verdict_on(plan, the_case, with_noise(right, deviation, normal), 600);
        sinad += verdict.figures[0].verdict == Verdict::fail;
        thd += verdict.figures[1].verdict == Verdict::fail;
        sfdr += verdict.figures[2].verdict == Verdict::fail;
    }
    // Each has a third of alpha; no more than 4 deviations of the binomial above that.
    const double share = 0.05 / 3.0, most = rounds * share + 4.0 * std::sqrt(rounds * share);
    INFO(sinad << ' ' << thd << ' ' << sfdr << " of " << rounds);
    CHECK(sinad <= most);
    CHECK(thd <= most);
    CHECK(sfdr <= most);
}
