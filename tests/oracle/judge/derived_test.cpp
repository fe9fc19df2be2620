// Limits that follow from the arithmetic: where they are refused, and what a start adds to them.
#include <catch2/catch.hpp>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/judge/admission.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/leftover.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using Catch::Matchers::WithinRel;
using test::judge;
using test::values;

namespace {

constexpr double lsb = 1.0 / 32768.0;

Case noise_case(const Plan& plan, const Rule& rule) {
    return test::a_case(plan, "noise", values({{"level_ratio", 0.5}, {"length_samples", std::int64_t{3000}}}),
                        {rule, test::implicit_latency()});
}

Rule derived_rule(const Plan& plan) { return test::rule(plan, "error", values({{"max_lsb", std::string("derived")}})); }

std::vector<Refusal> refused(const Plan& plan) { return refusals(plan, noise_case(plan, derived_rule(plan))); }

}  // namespace

TEST_CASE("derived: a gain that is no power of two has no limit", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.signal.output = *sample_format("i16");
    for (const double gain : {32768.0, 1.0, 0.25}) {
        plan.signal.output_per_input = gain;
        CHECK(refused(plan).empty());
    }
    for (const double gain : {30000.0, 32769.0, -32768.0}) {
        plan.signal.output_per_input = gain;
        const auto found = refused(plan);
        REQUIRE(found.size() == 1);
        CHECK(found[0].position.line == 20);
        CHECK(found[0].problem ==
              "no limit follows from the arithmetic in case \"a case\": output_per_input is no power of two, and "
              "nothing says how it is rounded");
        CHECK(found[0].remedy == "give the scale as a stage of its own, or a number for the limit");
    }
}

TEST_CASE("derived: a preloaded recursion has no limit, a preloaded sum of whole numbers has", "[judge]") {
    Plan plan = test::one_pole_plan();
    CHECK(refused(plan).empty());
    plan.filter[0].initial = Initial::first_sample;
    const auto found = refused(plan);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "no limit follows from the arithmetic in case \"a case\": the state that initial puts into stage 1 is "
          "rounded in a way that nobody said");
    CHECK(found[0].remedy == "leave initial out, or give a number for the limit");

    plan = test::moving_average_plan();
    plan.filter[0].initial = Initial::first_sample;
    CHECK(refused(plan).empty());
    plan.filter[0].initial = Initial::growing;
    CHECK(refused(plan).size() == 1);
    plan.filter[0].initial = Initial::first_sample;
    plan.filter[0].arithmetic.number = NumberKind::float32;
    CHECK(refused(plan).size() == 1);
}

TEST_CASE("derived: a CIC of whole numbers has a limit, one in float32 has none", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.filter = {FilterStage{CicDecimator{3, 4, 1, std::nullopt, 0}, std::nullopt, {}, "cic-decimator"}};
    CHECK(refused(plan).empty());
    plan.filter[0].arithmetic.number = NumberKind::float32;
    const auto found = refused(plan);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "no limit follows from the arithmetic in case \"a case\": a cic in float32 has none: what its integrators "
          "lose no comb brings back");
    CHECK(found[0].remedy == "give number = \"integer\" and words of whole numbers, or a number for the limit");
    CHECK(std::isinf(derived_limits(plan, noise_case(plan, derived_rule(plan)), 1)->error.largest()));
}

TEST_CASE("derived: what a flush leaves of the case before is in the limits", "[judge]") {
    const Plan plan = test::one_pole_plan();
    Case the_case = noise_case(plan, derived_rule(plan));
    const DerivedLimits from_reset = *derived_limits(plan, the_case, 1);
    // sum of h[k] = 7^k / 8^(k+1) over k > N is (7/8)^(N+1): below half an LSB of 2^-15 from N + 1 = 84 on.
    CHECK(flush_samples(plan.filter, 1.0, lsb / 2.0) == 83);
    the_case.start_samples = 83;
    for (const Start start : {Start::flush, Start::running}) {
        the_case.start = start;
        const double tail = std::pow(0.875, 84);
        const DerivedLimits limits = *derived_limits(plan, the_case, 1);
        CHECK_THAT(limits.error.highest, WithinRel(from_reset.error.highest + tail, 1e-9));
        CHECK_THAT(limits.error.lowest, WithinRel(from_reset.error.lowest - tail, 1e-9));
        const double count = start == Start::flush ? 3000.0 : 2917.0;
        const Leftover left = leftover(*described_channel(plan, the_case, 1), plan, the_case);
        CHECK_THAT(left.largest, WithinRel(tail, 1e-9));
        CHECK_THAT(left.bias, WithinRel(8.0 * tail / count, 1e-6));  // a geometric series of 7/8
        CHECK_THAT(left.rms, WithinRel(tail / std::sqrt((1.0 - 0.875 * 0.875) * count), 1e-6));
    }
    the_case.start_samples = 0;  // running on, all of the past is in the first sample
    CHECK_THAT(leftover(*described_channel(plan, the_case, 1), plan, the_case).largest, WithinRel(0.875, 1e-9));
}

TEST_CASE("derived: a filter that has forgotten all adds nothing to its limits", "[judge]") {
    const Plan plan = test::moving_average_plan();
    Case the_case = noise_case(plan, derived_rule(plan));
    the_case.start = Start::flush;
    the_case.start_samples = 15;
    CHECK(leftover(*described_channel(plan, the_case, 1), plan, the_case).largest == 0.0);
    the_case.start_samples = 14;
    CHECK_THAT(leftover(*described_channel(plan, the_case, 1), plan, the_case).largest, WithinRel(1.0 / 16.0, 1e-9));
}

TEST_CASE("derived: where samples are left out, the bias of the rest is held to the largest error alone", "[judge]") {
    Plan plan = test::one_pole_plan();
    // Gain 1 and an overshoot: the step to the top code reaches the rail, and what follows is judged by exact alone.
    plan.filter[0].design = BiquadCascade{{{0.03125, 0.0, 0.0, -1.875, 0.90625}}};
    plan.filter[0].coefficient_fraction_bits = plan.filter[0].arithmetic.coefficient_fraction_bits = 14;
    const Rule rule =
        test::rule(plan, "error", values({{"max_lsb", std::string("derived")}, {"bias_lsb", std::string("derived")}}));
    for (const double level : {0.2, 1.0}) {
        const Case the_case = test::a_case(
            plan, "step",
            values({{"level_ratio", level}, {"at_samples", std::int64_t{100}}, {"length_samples", std::int64_t{4000}}}),
            {rule});
        const RuleVerdict verdict = judge(plan, the_case, test::right_response(plan, the_case)).rules.at(0);
        CHECK(verdict.verdict == Verdict::pass);
        REQUIRE(verdict.figures.size() >= 3);
        const JudgedFigure& largest = verdict.figures[0];
        const JudgedFigure& bias = verdict.figures[2];
        REQUIRE(bias.name == "bias");
        INFO(verdict.reason);
        if (level < 1.0) {
            // Floor to half-up through the gain 32 at zero frequency; sum |h| is larger.
            CHECK(std::fabs(*bias.limit) < 0.8 * std::fabs(*largest.limit));
        } else {
            CHECK(bias.note == largest.note);
        }
    }
}

namespace {

/// What a board returns whose filter rounds so.
std::vector<Code> rounded_response(Plan plan, const Case& the_case, Rounding rounding) {
    plan.filter[0].arithmetic.rounding = rounding;
    std::vector<Code> codes(static_cast<std::size_t>(the_case.stimulus->length_samples()));
    fill_case_codes(plan, the_case, 0, codes);
    const auto twin = make_twin(*described_channel(plan, the_case, 1));
    REQUIRE(twin);
    std::vector<Code> response(codes.size());
    twin->process(codes, response);
    return response;
}

RuleVerdict judged_with(Plan plan, Rounding promised, Rounding board, const Rule& rule) {
    plan.filter[0].arithmetic.rounding = promised;
    const Case the_case = noise_case(plan, rule);
    return judge(plan, the_case, rounded_response(plan, the_case, board)).rules.at(0);
}

}  // namespace

TEST_CASE("derived: a board that rounds up where floor was promised is beyond the upper end", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const RuleVerdict right = judged_with(plan, Rounding::floor, Rounding::floor, derived_rule(plan));
    CHECK(right.verdict == Verdict::pass);
    const RuleVerdict wrong = judged_with(plan, Rounding::floor, Rounding::half_up, derived_rule(plan));
    CHECK(wrong.verdict == Verdict::fail);
    const JudgedFigure& largest = wrong.figures.at(0);
    // Of 16 points the mean is a multiple of 1/16 LSB: half up errs by up to 1/2, floor never by more than 0.
    CHECK(largest.name == "max");
    CHECK(*largest.value == 0.5);
    CHECK_THAT(*largest.limit, Catch::Matchers::WithinAbs(0.0, 1e-6));
    CHECK_FALSE(largest.at_least);
    CHECK_FALSE(largest.passed());
    CHECK_THAT(*largest.margin, Catch::Matchers::WithinAbs(-0.5, 1e-6));
    CHECK_THAT(largest.note, Catch::StartsWith("derived, -0.9375 .. "));
    REQUIRE(wrong.first_bad);
    CHECK(wrong.reason.find(" of 3000 samples beyond max") != std::string::npos);
}

TEST_CASE("derived: a board that floors where half-up was promised is beyond the lower end", "[judge]") {
    const Plan plan = test::moving_average_plan();
    CHECK(judged_with(plan, Rounding::half_up, Rounding::half_up, derived_rule(plan)).verdict == Verdict::pass);
    const RuleVerdict wrong = judged_with(plan, Rounding::half_up, Rounding::floor, derived_rule(plan));
    CHECK(wrong.verdict == Verdict::fail);
    const JudgedFigure& largest = wrong.figures.at(0);
    CHECK(*largest.value == -0.9375);
    CHECK_THAT(*largest.limit, WithinRel(-0.4375, 1e-6));
    CHECK(largest.at_least);
    CHECK_THAT(*largest.margin, WithinRel(-0.5, 1e-6));
    CHECK(largest.note == "derived, -0.4375 .. 0.5");
}

TEST_CASE("derived: a recursion that rounds the other way is seen by each end of error and bias", "[judge]") {
    const Plan plan = test::one_pole_plan();
    const Rule bias = test::rule(plan, "error", values({{"bias_lsb", std::string("derived")}}));
    for (const Rule& rule : {derived_rule(plan), bias}) {
        for (const auto& [promised, board] :
             {std::pair{Rounding::floor, Rounding::half_up}, std::pair{Rounding::half_up, Rounding::floor}}) {
            CHECK(judged_with(plan, promised, promised, rule).verdict == Verdict::pass);
            CHECK(judged_with(plan, promised, board, rule).verdict == Verdict::fail);
        }
    }
    // By its size alone the error of half-up, within 4 LSB, would pass for one of floor, within 7.
    const DerivedLimits floored = [&] {
        Plan other = plan;
        other.filter[0].arithmetic.rounding = Rounding::floor;
        return *derived_limits(other, noise_case(other, derived_rule(other)), 1);
    }();
    CHECK_THAT(floored.error.lowest, WithinRel(-7.0 * lsb, 1e-6));
    CHECK_THAT(floored.error.highest, Catch::Matchers::WithinAbs(0.0, 1e-6 * lsb));
}

TEST_CASE("derived: a limit in numbers is one of the magnitude", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Rule rule = test::rule(plan, "error", values({{"max_lsb", 0.94}, {"bias_lsb", 0.5}}));
    const RuleVerdict verdict = judged_with(plan, Rounding::floor, Rounding::floor, rule);
    CHECK(verdict.verdict == Verdict::pass);
    CHECK(*verdict.figures.at(0).value == 0.9375);
    CHECK(*verdict.figures.at(0).limit == 0.94);
    CHECK(verdict.figures.at(2).note == "negative");
    CHECK(*verdict.figures.at(2).value > 0.0);
}

TEST_CASE("derived: a response that is not a number is beyond every end", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Rule rule = test::rule(plan, "error", values({{"max_ratio", std::string("derived")}}));
    plan.filter[0].arithmetic.structure = Structure::fresh_sum;
    const Case the_case = noise_case(plan, rule);
    std::vector<Code> response = test::right_response(plan, the_case);
    CHECK(judge(plan, the_case, response).rules.at(0).verdict == Verdict::pass);
    response[700] = 0x7fc00000;
    const RuleVerdict verdict = judge(plan, the_case, response).rules.at(0);
    CHECK(verdict.verdict == Verdict::fail);
    REQUIRE(verdict.first_bad);
    CHECK(verdict.first_bad->index == 700);
}

TEST_CASE("derived: what is kept for one filter or case is not told for another", "[judge]") {
    Plan plan = test::one_pole_plan();
    const Case the_case = noise_case(plan, derived_rule(plan));
    const double half_up = derived_limits(plan, the_case, 1)->error.lowest;
    CHECK(derived_limits(plan, the_case, 1)->error.lowest == half_up);
    Plan floored = plan;
    floored.filter[0].arithmetic.rounding = Rounding::floor;
    CHECK(derived_limits(floored, the_case, 1)->error.lowest < 1.5 * half_up);
    Plan slower = plan;
    slower.filter[0].design = BiquadCascade{{{0.125, 0.0, 0.0, -0.75, 0.0}}};
    CHECK(derived_limits(slower, the_case, 1)->error.lowest > 0.7 * half_up);
    Plan finer = plan;
    finer.signal.input = finer.signal.output = *sample_format("q31");
    CHECK(derived_limits(finer, the_case, 1)->error.lowest > 1e-3 * half_up);
    Case late = the_case;
    late.start = Start::running;
    late.start_samples = 20;
    CHECK(derived_limits(plan, late, 1)->error.lowest < half_up - 1e-3);
    const Case louder =
        test::a_case(plan, "noise", values({{"level_codes", std::int64_t{3}}, {"length_samples", std::int64_t{3000}}}),
                     the_case.rules);
    // Three codes are no 6 bits: the worst case.
    CHECK(derived_limits(plan, louder, 1)->rms > 2.0 * derived_limits(plan, the_case, 1)->rms);
}

TEST_CASE("exact: a flush that leaves less than half an LSB leaves something to the bit", "[judge]") {
    Plan plan = test::moving_average_plan();
    // The last tap is a quarter of an LSB at full scale: the flush waits for the other two alone.
    plan.filter[0].design = Fir{{0.5, 0.25, 0x1p-17}};
    plan.filter[0].kind = "fir";
    plan.filter[0].coefficient_fraction_bits = 17;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 17;
    plan.filter[0].arithmetic.rounding = Rounding::half_up;
    CHECK(flush_samples(plan.filter, 1.0, lsb / 2.0) == 1);
    Case the_case = noise_case(plan, test::rule(plan, "exact", {}));
    the_case.start = Start::flush;
    the_case.start_samples = 1;
    const auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "case \"a case\" starts with a flush, which leaves the firmware in a state that nobody knows to the bit");
    the_case.start_samples = 2;
    CHECK(refusals(plan, the_case).empty());
    // Stored as multiples of 2^-15 the tap is 0 and the firmware knows two.
    plan.filter[0].coefficient_fraction_bits = plan.filter[0].arithmetic.coefficient_fraction_bits = 15;
    plan.filter[0].design = Fir{{0.5, 0.25, 0x1p-18}};
    the_case.start_samples = 1;
    CHECK(refusals(plan, the_case).empty());
}

TEST_CASE("exact: a running sum that saturates is wrong ever after, and no flush mends it", "[judge]") {
    Plan plan = test::moving_average_plan();
    StageArithmetic& arithmetic = plan.filter[0].arithmetic;
    arithmetic.rounding = Rounding::half_up;
    arithmetic.accumulator_overflow = Overflow::saturate;
    Case the_case = noise_case(plan, test::rule(plan, "exact", {}));
    the_case.start = Start::flush;
    the_case.start_samples = 15;
    arithmetic.accumulator_bits = 20;  // 16 times -2^15 is -2^19
    CHECK(refusals(plan, the_case).empty());
    arithmetic.accumulator_bits = 19;
    CHECK(refusals(plan, the_case).size() == 1);
    arithmetic.accumulator_overflow = Overflow::wrap;
    CHECK(refusals(plan, the_case).empty());
}
