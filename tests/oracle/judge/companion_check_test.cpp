// What cannot be sent once more is refused on paper, with what would do.
#include <catch2/catch.hpp>

#include "oracle/judge/admission.hpp"
#include "tests/support/companions.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

const ParameterValues nothing;

ParameterValues list(const std::string& word, std::vector<double> numbers) {
    return values({{word, std::move(numbers)}});
}

Case noise_case(const Plan& plan, Rule asked, double level = 0.25, std::int64_t length = 1000) {
    return a_case(plan, "noise", values({{"level_ratio", level}, {"length_samples", length}}), {std::move(asked)});
}

/// Of the first companion that is refused; "" where none is.
std::string refusal(const Plan& bare, const Case& base) {
    const Plan plan = with_case(bare, base);
    REQUIRE(plan.cases.size() > 1);
    for (const Case& the_case : plan.cases) {
        for (const Refusal& refusal : refusals(plan, the_case)) {
            CHECK(refusal.position.line == 20);
            return refusal.problem + "; " + refusal.remedy;
        }
    }
    return {};
}

std::string refusal(const Plan& plan, const std::string& kind, const ParameterValues& given) {
    return refusal(plan, noise_case(plan, rule(plan, kind, given)));
}

}  // namespace

TEST_CASE("companion check: what can be sent again is", "[judge]") {
    const Plan plan = moving_average_plan();
    CHECK(refusal(plan, "repeat", nothing).empty());
    CHECK(refusal(plan, "blocks", list("block_samples", {1.0, 999.0})).empty());
    CHECK(refusal(plan, "shift", list("by_samples", {1.0, 100000.0})).empty());
    CHECK(refusal(plan, "linearity", nothing).empty());
    CHECK(refusal(plan, "linearity", list("by_samples", {1.0, 999.0})).empty());
}

TEST_CASE("companion check: a running start is not had twice", "[judge]") {
    const Plan plan = moving_average_plan();
    Case base = noise_case(plan, rule(plan, "repeat", nothing));
    base.start = Start::running;
    base.start_samples = 10;
    CHECK(
        refusal(plan, base) ==
        "case \"a case\" starts running, in a state that is not had twice, and its stimulus is to be sent again; write "
        "start = \"reset\" or \"flush\"");
}

TEST_CASE("companion check: a flush clears a sum to the bit, and no rounded loop", "[judge]") {
    const Plan finite = moving_average_plan();
    const auto flushed = [](const Plan& plan, const std::string& kind, const ParameterValues& given) {
        Case base = noise_case(plan, rule(plan, kind, given));
        base.start = Start::flush;
        base.start_samples = 400;
        return refusal(plan, base);
    };
    CHECK(flushed(finite, "repeat", nothing).empty());
    const Plan loop = one_pole_plan();
    const std::string refused =
        "case \"a case\" starts with a flush, after which the rounding in a loop may still hold what went before, and "
        "the "
        "rule asks for equal bits; write start = \"reset\", or give the rule max_lsb";
    CHECK(flushed(loop, "repeat", nothing) == refused);
    CHECK(flushed(loop, "shift", nothing) == refused);
    CHECK(flushed(loop, "repeat", values({{"max_lsb", 0.0}})) == refused);
    CHECK(flushed(loop, "repeat", values({{"max_lsb", 8.0}})).empty());
    CHECK(flushed(loop, "linearity", nothing).empty());  // its limit has what is left in it
    CHECK(refusal(loop, "repeat", nothing).empty());
}

TEST_CASE("companion check: first samples that depend on when they come", "[judge]") {
    Plan plan = moving_average_plan();
    plan.filter[0].initial = Initial::growing;
    CHECK(refusal(plan, "repeat", nothing).empty());
    CHECK(
        refusal(plan, "shift", nothing) ==
        "case \"a case\" starts a filter whose first samples depend on when they come (initial), so what is sent later "
        "is answered otherwise; write start = \"flush\", or leave by_samples out");
    Case base = noise_case(plan, rule(plan, "shift", nothing));
    base.start = Start::flush;
    base.start_samples = 400;
    CHECK(refusal(plan, base).empty());
}

TEST_CASE("companion check: blocks and delays are shorter than the stimulus", "[judge]") {
    const Plan plan = moving_average_plan();
    CHECK(
        refusal(plan, "blocks", list("block_samples", {1000.0})) ==
        "case \"a case\" sends 1000 samples, which in blocks of 1000 samples are one block, as they are without; give "
        "block_samples below 1000");
    CHECK(
        refusal(plan, noise_case(plan, rule(plan, "blocks", nothing), 0.25, 1)) ==
        "case \"a case\" sends 1 sample, which in blocks of 1 sample are one block, as they are without; lengthen the "
        "stimulus");
    CHECK(
        refusal(plan, "linearity", list("by_samples", {1000.0})) ==
        "case \"a case\" sends 1000 samples, and of itself, 1000 later, nothing is left to add; give by_samples below "
        "1000, or lengthen the stimulus");
}

TEST_CASE("companion check: codes beyond the word", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto ramp = [&](double to, const ParameterValues& given) {
        return refusal(
            plan,
            a_case(plan, "ramp", values({{"from_ratio", 0.0}, {"to_ratio", to}, {"length_samples", std::int64_t{101}}}),
                   {rule(plan, "linearity", given)}));
    };
    CHECK(ramp(0.5, list("by_ratio", {-2.0})).empty());
    CHECK(ramp(0.5, list("by_ratio", {2.0})) ==
          "case \"a case\" has no codes for its stimulus times 2: sample 100 would lie beyond the range of q15, 1 "
          "times as "
          "far as it goes; divide the level of the stimulus by 1.01, or leave that one out");
    CHECK(ramp(0.5, list("by_ratio", {5.0})) ==
          "case \"a case\" has no codes for its stimulus times 5: sample 100 would lie beyond the range of q15, 2.5 "
          "times "
          "as far as it goes; divide the level of the stimulus by 2.51, or leave that one out");
    CHECK(ramp(0.49, list("by_ratio", {2.0})).empty());
    CHECK(ramp(0.6, list("by_samples", {2.0})).find("and itself 2 samples later") != std::string::npos);
    // -1 has no code in q15 when the stimulus reaches the lowest one.
    CHECK(ramp(-1.0, nothing).find("times -1: sample 100 would lie beyond") != std::string::npos);
    CHECK(
        refusal(plan, a_case(plan, "silence", values({{"length_samples", std::int64_t{100}}}),
                             {rule(plan, "linearity", nothing)})) ==
        "case \"a case\" is silent, and silence says nothing of linearity; use noise: shape = \"noise\", level_ratio = "
        "0.25, length_samples = 4096");
}

TEST_CASE("companion check: a filter must be linear, and say how it rounds where no limit is given", "[judge]") {
    Plan plan = moving_average_plan();
    plan.filter[0].design = Median{5};
    CHECK(refusal(plan, "repeat", nothing).empty());
    CHECK(
        refusal(plan, "linearity", values({{"max_lsb", 2.0}})) ==
        "case \"a case\" asks for linearity of a filter with a median in it, which is not linear; leave the rule out; "
        "rules of kind repeat, blocks and shift hold");
    Plan unknown = moving_average_plan();
    unknown.filter.clear();
    unknown.filter_is_unknown = true;
    CHECK(refusal(unknown, "repeat", nothing).empty());
    CHECK(refusal(unknown, "shift", nothing).empty());
    CHECK(refusal(unknown, "linearity", values({{"max_lsb", 2.0}})).empty());
    CHECK(refusal(unknown, "linearity", nothing) ==
          "case \"a case\" asks for linearity within a limit that follows from the arithmetic, and the filter is "
          "unknown; "
          "give max_lsb, max_ratio or max_unit");
}

TEST_CASE("companion check: a float stimulus is scaled without rounding, or a limit is given", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const std::string refused = refusal(plan, "linearity", list("by_ratio", {3.0}));
    CHECK(refused ==
          "case \"a case\" would be sent times 3, which rounds the stimulus itself in f32, and no limit is derived for "
          "that; give by_ratio powers of two, or give max_ratio");
    CHECK(refusal(plan, "linearity", values({{"by_ratio", std::vector<double>{3.0}}, {"max_ratio", 1e-5}})).empty());
}

TEST_CASE("companion check: what comes later keeps the rate cycle", "[judge]") {
    Plan plan = moving_average_plan();
    plan.filter[0].design = FirDecimator{{0.25, 0.5, 0.25}, 4};
    plan.filter[0].coefficient_fraction_bits = 14;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 14;
    CHECK(refusal(plan, "shift", list("by_samples", {8.0})).empty());
    CHECK(refusal(plan, "shift", list("by_samples", {6.0})) ==
          "case \"a case\" is to be sent 6 samples later, and its filter begins anew only every 4; give by_samples as "
          "multiples of 4");
}
