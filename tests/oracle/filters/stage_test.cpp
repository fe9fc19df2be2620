// What all kinds have in common: channels, the arithmetic of the stage, and the kind that nobody documented.
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::vector<double> list(std::initializer_list<double> numbers) { return numbers; }

}  // namespace

TEST_CASE("stage: channels are those of the signal, each once", "[filters]") {
    const StageContext three{.channels = 3};
    const auto given = [&](std::vector<double> numbers) {
        return refusal("moving-average", {{"points", whole(4)}, {"channels", std::move(numbers)}}, three);
    };
    const auto made = make("moving-average", {{"points", whole(4)}, {"channels", list({3, 1})}}, three);
    REQUIRE(made);
    CHECK(made->channels == std::vector<int>{3, 1});
    CHECK(make("moving-average", {{"points", whole(4)}}, three)->channels.empty());
    const std::string remedy = "\n  the signal has 3 channels: give whole numbers from 1 to 3";
    CHECK(given(list({4})) == "channels: there is no channel 4" + remedy);
    CHECK(given(list({1, 0})) == "channels: there is no channel 0" + remedy);
    CHECK(given(list({1.5})) == "channels: there is no channel 1.5" + remedy);
    CHECK(given({}) == "channels: no channel passes this stage" + remedy);
    CHECK(given(list({2, 3, 2})) == "channels: channel 2 is there twice\n  name each channel once");
    CHECK(refusal("moving-average", {{"points", whole(4)}, {"channels", list({2})}}) ==
          "channels: there is no channel 2\n  the signal has 1 channel: leave the list out");
    CHECK(make("moving-average", {{"points", whole(4)}, {"channels", list({1})}}));
}

TEST_CASE("stage: every kind but the unknown one takes channels", "[filters]") {
    for (const Recipe& recipe : filter_recipes()) {
        INFO(recipe.name);
        const Parameter* channels = find_parameter(recipe, "channels");
        CHECK((channels != nullptr) == (recipe.name != "unknown"));
        if (channels != nullptr) CHECK(channels->type == ParameterType::integers);
    }
}

TEST_CASE("stage: coefficient bits come from the filter, else from its arithmetic", "[filters]") {
    StageContext context;
    context.arithmetic.coefficient_fraction_bits = 12;
    context.arithmetic.rounding = Rounding::half_up;
    context.arithmetic.stage_format = *sample_format("q31");
    const std::vector<double> taps{0.5, 0.25};
    const auto own = make("fir", {{"taps", taps}, {"coefficient_fraction_bits", whole(15)}}, context);
    const auto inherited = make("fir", {{"taps", taps}}, context);
    REQUIRE((own && inherited));
    CHECK(own->coefficient_fraction_bits == 15);
    CHECK(own->arithmetic.coefficient_fraction_bits == 15);
    CHECK(inherited->coefficient_fraction_bits == 12);
    CHECK(inherited->arithmetic.coefficient_fraction_bits == 12);
    CHECK(inherited->arithmetic.rounding == Rounding::half_up);
    CHECK(inherited->arithmetic.stage_format->name == "q31");
    CHECK(inherited->kind == "fir");
    // A moving average has no coefficients: what the default says of them is not about it.
    const auto average = make("moving-average", {{"points", whole(3)}}, context);
    REQUIRE(average);
    CHECK_FALSE(average->coefficient_fraction_bits);
    CHECK_FALSE(average->arithmetic.coefficient_fraction_bits);
    CHECK(average->arithmetic.rounding == Rounding::half_up);
}

TEST_CASE("stage: a one-pole that shifts stores no coefficient", "[filters]") {
    StageContext context;
    context.arithmetic.coefficient_fraction_bits = 8;
    // 2^-10 in 8 bits would be 0, but nothing is stored in 8 bits.
    const auto made = make("one-pole", {{"shift_bits", whole(10)}}, context);
    REQUIRE(made);
    CHECK_FALSE(made->coefficient_fraction_bits);
    CHECK(refusal("one-pole", {{"coefficient", 0x1p-10}}, context) ==
          "coefficient_fraction_bits: with 8 fraction bits the coefficient is 0, and the output never moves\n"
          "  store the coefficients with 9 fraction bits or more");
    CHECK(refusal("one-pole", {{"shift_bits", whole(10)}, {"coefficient_fraction_bits", whole(15)}}) ==
          "coefficient_fraction_bits: a firmware that shifts stores no coefficient, and shift_bits is given\n"
          "  leave coefficient_fraction_bits out, or give coefficient instead of shift_bits");
}

TEST_CASE("stage: inherited coefficient bits that do not do are refused by the same words", "[filters]") {
    StageContext context;
    context.arithmetic.coefficient_fraction_bits = 3;
    CHECK(refusal("fir", {{"taps", list({0.01})}}, context) ==
          "coefficient_fraction_bits: with 3 fraction bits all taps are 0\n"
          "  store the coefficients with 6 fraction bits or more");
}

TEST_CASE("stage: the unknown kind has words but no stage", "[filters]") {
    const Recipe* recipe = find_recipe(filter_recipes(), "unknown");
    REQUIRE(recipe != nullptr);
    CHECK(recipe->parameters.empty());
    const auto outcome = make("unknown", {});
    REQUIRE_FALSE(outcome);
    CHECK(outcome.error().kind == ErrorKind::defect);
}
