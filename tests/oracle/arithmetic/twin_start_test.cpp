// Starts other than zeros, worked by hand, and what is refused of them; what needs no rounding; what a CIC reached.
#include "tests/oracle/arithmetic/twin_support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

Given word(const char* name, const char* value) { return {name, std::string(value)}; }
Given number(const char* name, int value) { return {name, whole(value)}; }

std::string missing(FilterStage stage, Initial initial) {
    stage.initial = initial;
    const auto result = describe({stage}, *sample_format("i16"), *sample_format("i16"), 1.0);
    if (!result.described->missing) return "";
    return result.described->missing->error.problem + " | " + result.described->missing->error.remedy;
}

Codes started(FilterStage stage, Initial initial, const Codes& in) {
    stage.initial = initial;
    return run(*twin_of({stage}, "i16", "i16"), in);
}

}  // namespace

TEST_CASE("start: sequences worked by hand", "[twin]") {
    const auto average = promised_stage("moving-average", {number("points", 4)}, {word("rounding", "floor")});
    // 8 8 8 | 8, 12, 1, -5: sums 32, 36, 29, 16
    CHECK(started(average, Initial::first_sample, {8, 12, 1, -5}) == Codes{8, 9, 7, 4});
    // 8/1, 20/2, 21/3, 16/4, then 12 + 1 - 5 + 0 by 4
    CHECK(started(average, Initial::growing, {8, 12, 1, -5, 0}) == Codes{8, 10, 7, 4, 2});
    const auto median = promised_stage("median", {number("points", 3)}, {});
    CHECK(started(median, Initial::first_sample, {5, -9, -9}) == Codes{5, 5, -9});
    // s = 80 with four fraction bits; + (0 - 80) / 4, and so on
    const auto pole =
        promised_stage("one-pole", {number("shift_bits", 2)},
                       {word("rounding", "floor"), number("state_bits", 24), number("state_fraction_bits", 4)});
    CHECK(started(pole, Initial::first_sample, {5, 0, 0}) == Codes{5, 3, 2});
    // Of a decimator by 3 with two taps 1: x + x, then x[3] + x[2].
    const auto fir = promised_stage("fir-decimator", {{"taps", std::vector<double>{1.0, 1.0}}, number("factor", 3)},
                                    {word("rounding", "floor"), number("coefficient_fraction_bits", 0)});
    CHECK(started(fir, Initial::first_sample, {7, 1, 2, 3}) == Codes{14, 5});
}

TEST_CASE("start: a reset starts anew, and a state carries on whether it has started or not", "[twin]") {
    auto stage = promised_stage("moving-average", {number("points", 4)}, {word("rounding", "floor")});
    for (const Initial initial : {Initial::first_sample, Initial::growing}) {
        stage.initial = initial;
        const auto twin = twin_of({stage}), other = twin_of({stage});
        const Codes in = noise_codes(40, 3);
        const Codes expected = run(*twin, in);
        twin->reset();
        CHECK(run(*twin, in) == expected);
        for (const std::ptrdiff_t after : {0, 1, 3, 9}) {
            twin->reset();
            run(*twin, Codes(in.begin(), in.begin() + after));
            REQUIRE(other->set_state(twin->state()));
            CHECK(run(*other, Codes(in.begin() + after, in.end())) == Codes(expected.begin() + after, expected.end()));
        }
    }
}

TEST_CASE("start: what has no bits is refused with the reason", "[twin]") {
    const Given floor = word("rounding", "floor");
    const auto saving = promised_stage("moving-average", {number("points", 4)}, {floor, word("fraction_saving", "on")});
    CHECK(missing(saving, Initial::zeros).empty());
    CHECK(
        missing(saving, Initial::first_sample) ==
        "with fraction_saving a start other than zeros has no twin | leave initial or fraction_saving out, or judge by "
        "an error rule");
    const auto shifting = promised_stage("moving-average", {number("points", 4)}, {floor, word("division", "shift")});
    CHECK(missing(shifting, Initial::first_sample).empty());
    CHECK(
        missing(shifting, Initial::growing) ==
        "only an average that divides grows: the others have one divisor | give division = \"divide\", or judge by an "
        "error rule");
    const auto section = biquads({{0.5, 0.0, 0.0, -0.5, 0.0}}, {floor, number("coefficient_fraction_bits", 8)});
    CHECK(missing(section, Initial::first_sample) ==
          "a start other than zeros has no twin | leave initial out, or judge by an error rule");
}

TEST_CASE("median: an odd one needs no rounding for exact, an even one does", "[twin]") {
    CHECK(missing(promised_stage("median", {number("points", 3)}, {}), Initial::zeros).empty());
    CHECK(missing(promised_stage("median", {number("points", 4)}, {}), Initial::zeros).substr(0, 21) ==
          "rounding is not said ");
}

TEST_CASE("cic: registers that wrap say what the last of them held", "[twin]") {
    const auto stage = promised_stage("cic-decimator", {number("order", 2), number("factor", 4)},
                                      {word("rounding", "floor"), number("state_bits", 20)});
    const auto twin = twin_of({stage}, "i16", "i16");
    run(*twin, Codes(400, -1000));
    const auto reaches = twin->reaches();
    REQUIRE(reaches.size() == 2);
    // The gain is 4^2.
    CHECK((reaches[0].name == "stage 1, comb 2" && reaches[0].lowest == -16000.0 && reaches[0].overflows == 0));
}
