#include "oracle/filters/stage_arithmetic.hpp"

#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::string refusal_of(std::initializer_list<Given> given, const StageArithmetic& defaults = {}) {
    const auto outcome = make_arithmetic(words(given), defaults);
    return outcome ? "accepted" : to_text(outcome.error());
}

std::string text(const char* word) { return word; }

}  // namespace

TEST_CASE("arithmetic: nothing said is nothing promised, but saturation", "[filters]") {
    const auto made = make_arithmetic({});
    REQUIRE(made);
    CHECK_FALSE(made->coefficient_fraction_bits);
    CHECK_FALSE(made->accumulator_bits);
    CHECK_FALSE(made->rounding);
    CHECK_FALSE(made->stage_format);
    CHECK(made->output_overflow == Overflow::saturate);
}

TEST_CASE("arithmetic: a stage's own table goes over the defaults, word by word", "[filters]") {
    const auto defaults = make_arithmetic(words({{"coefficient_fraction_bits", whole(14)},
                                                 {"accumulator_bits", whole(40)},
                                                 {"rounding", text("half-even")},
                                                 {"output_overflow", text("wrap")},
                                                 {"stage_format", text("q15")}}));
    REQUIRE(defaults);
    CHECK((defaults->coefficient_fraction_bits == 14 && defaults->accumulator_bits == 40));
    CHECK((defaults->rounding == Rounding::half_even && defaults->output_overflow == Overflow::wrap));
    CHECK(defaults->stage_format->name == "q15");
    const auto same = make_arithmetic({}, *defaults);
    REQUIRE(same);
    CHECK((same->output_overflow == Overflow::wrap && same->rounding == Rounding::half_even));
    CHECK((same->stage_format->name == "q15" && same->accumulator_bits == 40));
    const auto own = make_arithmetic(
        words({{"output_overflow", text("saturate")}, {"rounding", text("floor")}, {"stage_format", text("q31")}}),
        *defaults);
    REQUIRE(own);
    CHECK((own->output_overflow == Overflow::saturate && own->rounding == Rounding::floor));
    CHECK((own->stage_format->name == "q31" && own->coefficient_fraction_bits == 14));
}

TEST_CASE("arithmetic: the bits that registers discard are a list of whole numbers", "[filters]") {
    const std::vector<double> some{0.0, 3.0, 4.0, 5.0}, others{1.0, 1.0};
    const auto defaults = make_arithmetic(words({{"discarded_bits", some}}));
    REQUIRE(defaults);
    CHECK(defaults->discarded_bits == std::vector<int>{0, 3, 4, 5});
    CHECK(make_arithmetic({}, *defaults)->discarded_bits == defaults->discarded_bits);
    CHECK(make_arithmetic(words({{"discarded_bits", others}}), *defaults)->discarded_bits == std::vector<int>{1, 1});
    CHECK(refusal_of({{"discarded_bits", std::vector<double>{1.5}}}) != "accepted");
}

TEST_CASE("arithmetic: every rounding and every format can be said", "[filters]") {
    for (const std::string_view name : rounding_names()) {
        const auto made = make_arithmetic(words({{"rounding", std::string(name)}}));
        REQUIRE(made);
        CHECK(name_of(*made->rounding) == name);
    }
    for (const SampleFormat& format : sample_formats()) {
        const auto made = make_arithmetic(words({{"stage_format", std::string(format.name)}}));
        REQUIRE(made);
        CHECK(made->stage_format->name == format.name);
    }
    CHECK(refusal_of({{"rounding", text("nearest")}}) ==
          "rounding: \"nearest\" is not a choice\n  choices: floor, toward-zero, half-up, half-away, half-even");
    CHECK(refusal_of({{"accumulator_bits", whole(65)}}) ==
          "accumulator_bits: 65 bits is above the largest, 64 bits\n  give 64 or less");
    CHECK(make_arithmetic(words({{"accumulator_bits", whole(64)}, {"coefficient_fraction_bits", whole(62)}})));
}

TEST_CASE("arithmetic: an accumulator narrower than the words that it fills is refused, where it is said",
          "[filters]") {
    const std::string remedy = "\n  give accumulator_bits = 32 or more, or a narrower stage_format";
    const std::string problem = ": an accumulator of 31 bits cannot fill 32-bit words of q31" + remedy;
    CHECK(make_arithmetic(words({{"accumulator_bits", whole(32)}, {"stage_format", text("q31")}})));
    CHECK(refusal_of({{"accumulator_bits", whole(31)}, {"stage_format", text("q31")}}) == "accumulator_bits" + problem);
    StageArithmetic narrow;
    narrow.accumulator_bits = 31;
    CHECK(refusal_of({{"stage_format", text("q31")}}, narrow) == "stage_format" + problem);
    StageArithmetic wide_words;
    wide_words.stage_format = *sample_format("q31");
    CHECK(refusal_of({{"accumulator_bits", whole(31)}}, wide_words) == "accumulator_bits" + problem);
}

TEST_CASE("arithmetic: floats do not wrap", "[filters]") {
    CHECK(make_arithmetic(words({{"stage_format", text("f32")}})));
    const std::string problem =
        ": f32 does not wrap\n  give output_overflow = \"saturate\", or a stage_format of whole numbers";
    CHECK(refusal_of({{"stage_format", text("f32")}, {"output_overflow", text("wrap")}}) ==
          "output_overflow" + problem);
    StageArithmetic wrapping;
    wrapping.output_overflow = Overflow::wrap;
    CHECK(refusal_of({{"stage_format", text("f32")}}, wrapping) == "stage_format" + problem);
}

TEST_CASE("arithmetic: each word has a help, and only overflow has a default", "[filters]") {
    for (const Parameter& parameter : arithmetic_recipe().parameters) {
        INFO(parameter.name);
        CHECK(parameter.help.back() == '.');
        CHECK_FALSE(parameter.required);
        CHECK_FALSE(parameter.default_value);
        if (parameter.type == ParameterType::choice)
            CHECK(parameter.optional_choice == (parameter.name != "output_overflow"));
    }
}
