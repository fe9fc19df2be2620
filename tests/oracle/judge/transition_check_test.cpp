// What a transition rule asks of a stimulus and a filter: refused on paper, with a stimulus that would do.
#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/judge/admission.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

const ParameterValues rise = values({{"max_rise_samples", 20.0}});

ParameterValues step(std::int64_t at, std::int64_t length, double level = 0.5) {
    return values({{"at_samples", at}, {"length_samples", length}, {"level_ratio", level}});
}

std::vector<Refusal> refused(const Plan& plan, const std::string& shape, const ParameterValues& given,
                             const ParameterValues& limits = rise) {
    return refusals(plan, a_case(plan, shape, given, {rule(plan, "transition", limits)}));
}

Refusal only(const std::vector<Refusal>& found) {
    REQUIRE(found.size() == 1);
    CHECK(found[0].position.line == 20);
    const std::string head = "a rule of kind \"transition\" in case \"a case\": ";
    REQUIRE(found[0].problem.starts_with(head));
    return {found[0].position, found[0].problem.substr(head.size()), found[0].remedy};
}

Plan plan_of(FilterDesign design) {
    Plan plan = moving_average_plan();
    plan.filter[0].design = std::move(design);
    return plan;
}

}  // namespace

TEST_CASE("transition check: there must be a step, and room before it", "[judge]") {
    const Plan plan = moving_average_plan();
    CHECK(refused(plan, "step", step(64, 600)).empty());
    CHECK(only(refused(plan, "step", step(0, 600))).problem == "its stimulus does not step from one level to another");
    CHECK(only(refused(plan, "silence", values({{"length_samples", std::int64_t{600}}}))).remedy ==
          "give it shape = \"step\", with at_samples = 64 or more");
    CHECK(only(refused(plan, "step", step(9'000'000'000, 10'000'000'000))).problem ==
          "its stimulus does not step from one level to another");
    const Refusal early = only(refused(plan, "step", step(15, 600)));
    CHECK(early.problem ==
          "it steps at sample 15, and the level before it is told from sample 0 of the response on, over at least 16");
    CHECK(early.remedy == "step at at_samples = 16 or later");
    CHECK(refused(plan, "step", step(16, 600)).empty());
    CHECK(only(refused(plan, "noise", values({{"length_samples", std::int64_t{600}}})))
              .problem.starts_with("it steps at"));
    // Down from a level: that must have been reached first.
    const auto square = [](std::int64_t period) {
        return values({{"period_samples", period}, {"length_samples", std::int64_t{600}}});
    };
    const auto fall = values({{"max_fall_samples", 20.0}});
    CHECK(refused(plan, "square", square(300), fall).empty());
    CHECK(only(refused(plan, "square", square(60), fall)).remedy == "step at at_samples = 31 or later");
}

TEST_CASE("transition check: a word for the other direction is refused", "[judge]") {
    const Plan plan = moving_average_plan();
    const Refusal found = only(refused(plan, "step", step(64, 600, -0.5)));
    CHECK(found.problem == "the response falls, and max_rise_samples limits a rise");
    CHECK(found.remedy == "give max_fall_samples");
    CHECK(only(refused(plan, "step", step(64, 600), values({{"max_fall_samples", 20.0}}))).problem ==
          "the response rises, and max_fall_samples limits a fall");
    // By the response: an inverting filter makes a fall of a step up.
    const Plan inverting = plan_of(Fir{{-0.5, -0.5}});
    CHECK(only(refused(inverting, "step", step(64, 600))).problem ==
          "the response falls, and max_rise_samples limits a rise");
}

TEST_CASE("transition check: a filter that keeps nothing of a constant has no transition", "[judge]") {
    const Refusal found = only(refused(plan_of(Fir{{0.5, -0.5}}), "step", step(64, 600)));
    CHECK(found.problem == "its filter has a gain of 0 at frequency 0, so nothing of a step remains");
    CHECK(found.remedy == "leave the rule out; rules about error, response and exact hold");
}

TEST_CASE("transition check: a record that ends too early names the length that does", "[judge]") {
    const double r = std::exp(-1.0 / 300.0);
    const Plan plan = plan_of(BiquadCascade{{{1.0 - r, 0.0, 0.0, -r, 0.0}}});
    const auto settle = values({{"max_settling_samples", 2000.0}});
    const Refusal found = only(refused(plan, "step", step(64, 1000), settle));
    CHECK(found.problem ==
          "the settling of the design itself cannot be told: the record ends before the response has settled");
    const std::string words = "so to sample ";
    const auto at = found.remedy.find(words);
    REQUIRE(at != std::string::npos);
    const std::int64_t length = std::stoll(found.remedy.substr(at + words.size()));
    CHECK(refused(plan, "step", step(64, length), settle).empty());
    CHECK(only(refused(plan, "step", step(64, 300), rise)).problem.starts_with("the rise of the design itself"));
    CHECK(only(refused(plan, "step", step(64, 900), values({{"final_lsb", 2.0}})))
              .problem.starts_with("the final value of the design itself"));
    // The mean of the last 484 of 1936 samples is 16384 exp(-1936 / 300) (exp(484 / 300) - 1) 300 / 484 = 64 LSB short.
    CHECK(refused(plan, "step", step(64, 2000), values({{"final_lsb", 66.0}})).empty());
    CHECK(only(refused(plan, "step", step(64, 2000), values({{"final_lsb", 62.0}}))).problem ==
          "the final value of the design itself cannot be told: the record ends before the response has settled");
    CHECK(only(refused(plan, "step", step(20, 30), rise)).problem.starts_with("the figures of the design itself"));
    // An hour of ringing: nobody knows how long.
    const double slow = 1.0 - 1e-9;
    const Plan endless = plan_of(BiquadCascade{{{1.0 - slow, 0.0, 0.0, -slow, 0.0}}});
    CHECK(only(refused(endless, "step", step(64, 1000))).remedy == "hold the level for longer");
    CHECK(only(refused(endless, "square",
                       values({{"period_samples", std::int64_t{300}}, {"length_samples", std::int64_t{600}}}),
                       values({{"max_fall_samples", 20.0}})))
              .problem == "its filter takes more than 1048576 samples to settle on the level before the step");
}

TEST_CASE("transition check: steps of few codes cannot tell fine limits", "[judge]") {
    const Plan plan = moving_average_plan();
    const Refusal coarse = only(refused(plan, "step", step(64, 600, 8.0 / 32768.0)));
    CHECK(coarse.problem ==
          "the rise of the design itself cannot be told: the codes are too coarse, or the noise too "
          "large, for this level or band");
    CHECK(coarse.remedy == "give the step a higher level, or a wider band_percent");
    const auto overshoot = [](double limit) { return values({{"max_overshoot_percent", limit}}); };
    // A code is 100 / 16384 % of a step of 16384 codes.
    const Refusal fine = only(refused(plan, "step", step(64, 600), overshoot(0.0061)));
    CHECK(fine.problem == "the overshoot is told to 0.006104 %, what a code is worth there, and 0.0061 is less");
    CHECK(fine.remedy == "give a limit of at least 0.01221, or the step a higher level");
    CHECK(refused(plan, "step", step(64, 600), overshoot(0.0062)).empty());
}
