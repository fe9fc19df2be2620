#include "oracle/arithmetic/described.hpp"

#include <catch2/catch.hpp>

#include "stimuli/outcome.hpp"
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using halflsb::testing::Given;
using halflsb::testing::make;
using halflsb::testing::whole;
using halflsb::testing::words;

namespace {

SampleFormat format(std::string_view name) { return *sample_format(name); }

StageArithmetic arithmetic(std::initializer_list<Given> given) {
    const auto made = make_arithmetic(words(given));
    REQUIRE(made);
    return *made;
}

FilterStage stage(std::string_view kind, std::initializer_list<Given> given, std::initializer_list<Given> promised) {
    StageContext context;
    context.arithmetic = arithmetic(promised);
    const auto made = make(kind, given, context);
    REQUIRE(made);
    return *made;
}

FilterStage biquad(std::initializer_list<Given> promised, double b0 = 0.25, double a1 = -1.75) {
    return stage("biquad-cascade", {{"sections", std::vector<std::vector<double>>{{b0, 0.5, 0.25, a1, 0.8125}}}},
                 promised);
}

std::string told(const Error& error) { return error.place + ": " + error.problem + " (" + error.remedy + ")"; }

/// The refusal in full, with the word that it blames; "described" when there is none.
std::string refusal(const FilterChain& chain, std::string_view in = "q15", std::string_view out = "q15",
                    double gain = 1.0) {
    const auto result = describe(chain, format(in), format(out), gain);
    return result.problem ? told(result.problem->error) : "described";
}

DescribedChain described(const FilterChain& chain, std::string_view in = "q15", std::string_view out = "q15",
                         double gain = 1.0) {
    auto result = describe(chain, format(in), format(out), gain);
    REQUIRE(result.described);
    return *result.described;
}

std::string missing(const FilterChain& chain, std::string_view in = "q15", std::string_view out = "q15",
                    double gain = 1.0) {
    const auto& found = described(chain, in, out, gain).missing;
    return found ? std::to_string(found->stage) + ": " + told(found->error) : "nothing";
}

}  // namespace

TEST_CASE("described: what is left out has the values of docs/arithmetic.md") {
    const auto chain =
        described({biquad({{"coefficient_fraction_bits", whole(14)}, {"rounding", std::string("half-up")}})});
    REQUIRE(chain.stages.size() == 1);
    CHECK_FALSE(chain.missing);
    const DescribedStage& s = chain.stages[0];
    CHECK(s.structure == Structure::direct_1);
    CHECK(s.number == NumberKind::integer);
    CHECK(s.rounding_at == RoundingAt::sum);
    CHECK(s.accumulator_bits == wide_bits);
    CHECK(s.accumulator_overflow == Overflow::wrap);
    CHECK(s.state == Word{16, 15, Overflow::saturate});
    CHECK(s.output_rounding == Rounding::half_up);
    CHECK(s.in.word.fraction_bits == 15);
    CHECK(accumulator_fraction_bits_of(s, 29, 15) == 29);
    CHECK(stored_coefficient(s, 1.75) == 28672);
}

TEST_CASE("described: transposed-2 keeps the whole accumulator, direct-2 the output words") {
    const auto transposed = described({biquad({{"coefficient_fraction_bits", whole(14)},
                                               {"rounding", std::string("floor")},
                                               {"accumulator_bits", whole(48)},
                                               {"structure", std::string("transposed-2")}})});
    CHECK(transposed.stages[0].state == Word{48, 29, Overflow::saturate});
    const auto second = described({biquad({{"coefficient_fraction_bits", whole(14)},
                                           {"rounding", std::string("floor")},
                                           {"output_overflow", std::string("wrap")},
                                           {"structure", std::string("direct-2")}})});
    CHECK(second.stages[0].state == Word{16, 15, Overflow::wrap});
}

TEST_CASE("described: registers of a cic have the fraction bits of its input, whatever another stage keeps") {
    const auto cic =
        stage("cic-decimator", {{"order", whole(2)}, {"factor", whole(4)}},
              {{"rounding", std::string("floor")}, {"state_bits", whole(32)}, {"state_fraction_bits", whole(20)}});
    CHECK(described({cic}).stages[0].state == Word{32, 15, Overflow::wrap});
}

TEST_CASE("described: ports count in values of the input, whatever the formats") {
    const auto average = stage("moving-average", {{"points", whole(4)}}, {{"rounding", std::string("floor")}});
    const auto offset = described({average}, "u12", "i16");
    CHECK(offset.stages[0].in.zero_code == 2048);
    CHECK(offset.stages[0].in.word.fraction_bits == 0);
    CHECK(offset.stages[0].out.word == Word{16, 0, Overflow::saturate});
    const auto scaled = described({average}, "q15", "i16", 32768.0);
    CHECK(scaled.stages[0].out.word.fraction_bits == 15);
    const auto floating = described({average}, "q15", "f32", 2.0);
    CHECK(floating.stages[0].out.is_float);
    CHECK(floating.stages[0].out.word.fraction_bits == 1);
    CHECK(floating.stages[0].number == NumberKind::float32);
}

TEST_CASE("described: a one-pole by shift stores 1, one by coefficient its multiple") {
    const auto shift = stage("one-pole", {{"shift_bits", whole(6)}}, {{"rounding", std::string("floor")}});
    const auto chain = described({shift});
    CHECK(chain.stages[0].coefficient_fraction_bits == 6);
    CHECK(chain.stages[0].structure == Structure::difference);
    CHECK_FALSE(chain.missing);
    const auto loose = stage("one-pole", {{"coefficient", 0.1}}, {{"rounding", std::string("floor")}});
    CHECK(missing({loose}) ==
          "0: coefficient_fraction_bits: coefficient_fraction_bits is not said (say as which multiples of 2^-n the "
          "coefficients are stored)");
}

TEST_CASE("described: a twin needs the rounding and the words between stages") {
    const auto silent = stage("moving-average", {{"points", whole(4)}}, {});
    CHECK(missing({silent}) ==
          "0: rounding: rounding is not said (say how results are rounded: \"floor\" for a shift)");
    const auto floor = stage("moving-average", {{"points", whole(4)}}, {{"rounding", std::string("floor")}});
    CHECK(missing({floor, floor}) ==
          "0: stage_format: stage_format is not said (say the words between this stage and the next)");
    const auto said = stage("moving-average", {{"points", whole(4)}},
                            {{"rounding", std::string("floor")}, {"stage_format", std::string("q31")}});
    CHECK(missing({said, floor}) == "nothing");
    CHECK(missing({floor}, "q15", "i16", 30000.0) ==
          "0: output_per_input: output_per_input is no power of two (only a power of two moves the binary point; give "
          "the scale as a stage of its own)");
    CHECK(missing({}) == "nothing");
    CHECK(missing({}, "q31", "q15") ==
          "0: rounding: rounding is not said (say how results are rounded: \"floor\" for a shift)");
}

TEST_CASE("described: a coefficient outside its word is refused with the fraction bits that would do") {
    CHECK(refusal({biquad({{"coefficient_bits", whole(16)}, {"coefficient_fraction_bits", whole(14)}})}) ==
          "described");
    CHECK(refusal({biquad({{"coefficient_bits", whole(16)}, {"coefficient_fraction_bits", whole(15)}})}) ==
          "coefficient_bits: -a1 = 1.75 does not fit 16-bit words with 15 fraction bits (coefficient_fraction_bits = "
          "14 would do)");
    // -1 is a word, +1 is not: the sign in which it is stored decides.
    const auto taps = [](double tap) {
        return stage("fir", {{"taps", std::vector<double>{tap}}},
                     {{"coefficient_bits", whole(16)}, {"coefficient_fraction_bits", whole(15)}});
    };
    CHECK(refusal({taps(-1.0)}) == "described");
    CHECK(refusal({taps(1.0)}) ==
          "coefficient_bits: taps[0] = 1 does not fit 16-bit words with 15 fraction bits (coefficient_fraction_bits = "
          "14 would do)");
    CHECK(refusal({taps(1e6)}) ==
          "coefficient_bits: taps[0] = 1000000 does not fit 16-bit words with 15 fraction bits (coefficient_bits = 36 "
          "would do)");
    // With 7 fraction bits or fewer 8 bits would have to hold 1 - 1/1024, and 1/1024 is stored as 0.
    const auto one_pole = [](int bits) {
        return stage("one-pole", {{"coefficient", 1.0 / 1024}},
                     {{"structure", std::string("direct-1")},
                      {"coefficient_bits", whole(bits)},
                      {"coefficient_fraction_bits", whole(15)}});
    };
    CHECK(refusal({one_pole(8)}) ==
          "coefficient_bits: 1 - coefficient = 0.9990234375 does not fit 8-bit words with 15 fraction bits "
          "(coefficient_bits = 16 would do)");
    CHECK(refusal({one_pole(16)}) == "described");
}

TEST_CASE("described: an accumulator holds at least one product") {
    const auto with = [](int bits) {
        return biquad({{"coefficient_fraction_bits", whole(14)}, {"accumulator_bits", whole(bits)}});
    };
    // 1.75 2^14 2^15 = 7 2^27 lies between 2^29 and 2^30, so 31 bits hold it.
    CHECK(refusal({with(31)}) == "described");
    CHECK(refusal({with(30)}) ==
          "accumulator_bits: an accumulator of 30 bits cannot hold one product, that of -a1 = 1.75 "
          "(accumulator_bits = 31 would do for one; a sum needs more)");
    const auto rounded = biquad({{"coefficient_fraction_bits", whole(14)},
                                 {"accumulator_bits", whole(17)},
                                 {"rounding_at", std::string("product")}});
    CHECK(refusal({rounded}) == "described");
    // 0.5 2^40 2^31 = 2^70: 7 bits too many for 64, and the remedy is accepted.
    const auto fine = [](int bits) {
        return stage("fir", {{"taps", std::vector<double>{0.5}}},
                     {{"coefficient_fraction_bits", whole(bits)}, {"accumulator_bits", whole(64)}});
    };
    CHECK(refusal({fine(40)}, "q31", "q31") ==
          "accumulator_bits: an accumulator of 64 bits cannot hold one product, that of taps[0] = 0.5 "
          "(coefficient_fraction_bits = 33 with accumulator_bits = 64 would do, or rounding_at = \"product\")");
    CHECK(refusal({fine(33)}, "q31", "q31") == "described");
    const auto average = stage("moving-average", {{"points", whole(4)}}, {{"accumulator_bits", whole(15)}});
    CHECK(refusal({average}) ==
          "accumulator_bits: an accumulator of 15 bits cannot hold one sample (accumulator_bits = 16 would do for one; "
          "a sum needs more)");
}

TEST_CASE("described: the input of direct-2 needs an accumulator of its own fraction bits only") {
    const auto with = [](int bits) {
        return biquad({{"coefficient_fraction_bits", whole(14)},
                       {"structure", std::string("direct-2")},
                       {"state_bits", whole(20)},
                       {"state_fraction_bits", whole(10)},
                       {"accumulator_bits", whole(bits)}});
    };
    // x has 31 fraction bits, a product of a state 10 + 14: 1.75 2^31 lies between 2^31 and 2^32, so 33 bits hold it.
    CHECK(refusal({with(33)}, "q31", "q15") == "described");
    CHECK(refusal({with(32)}, "q31", "q15") ==
          "accumulator_bits: an accumulator of 32 bits cannot hold one product, that of -a1 = 1.75 "
          "(accumulator_bits = 33 would do for one; a sum needs more)");
}

TEST_CASE("described: a division that cannot be is refused") {
    const auto average = [](int points, std::initializer_list<Given> promised) {
        return stage("moving-average", {{"points", whole(points)}}, promised);
    };
    CHECK(refusal({average(16, {{"division", std::string("shift")}})}) == "described");
    CHECK(refusal({average(12, {{"division", std::string("shift")}})}) ==
          "division: 12 points are no power of two, so no shift divides by them (give division = \"divide\" or "
          "\"reciprocal\")");
    CHECK(refusal({average(12, {{"division", std::string("reciprocal")}})}) ==
          "division: nothing says how finely the reciprocal of points is stored (give coefficient_fraction_bits)");
    CHECK(refusal({average(12, {{"division", std::string("reciprocal")}, {"coefficient_fraction_bits", whole(16)}})}) ==
          "described");
    CHECK(refusal({average(12, {{"division", std::string("reciprocal")}, {"coefficient_fraction_bits", whole(2)}})}) ==
          "coefficient_fraction_bits: the reciprocal of 12 points is stored as 0 (coefficient_fraction_bits = 11 would "
          "do)");
}

TEST_CASE("described: fraction saving needs a fraction that is dropped") {
    const auto with = [](std::string_view word, std::string_view value) {
        return biquad({{"coefficient_fraction_bits", whole(14)},
                       {"fraction_saving", std::string("on")},
                       {word.data(), std::string(value)}});
    };
    CHECK(refusal({with("structure", "direct-1")}) == "described");
    CHECK(refusal({with("structure", "transposed-2")}) ==
          "fraction_saving: transposed-2 saves no fraction: its states hold it already (leave fraction_saving out, or "
          "give another structure)");
    CHECK(refusal({with("rounding_at", "product")}) ==
          "fraction_saving: where each product is rounded no sum has a fraction to save (leave fraction_saving out, or "
          "give rounding_at = \"sum\")");
}

TEST_CASE("described: integers neither take nor give f32 words") {
    const auto average = stage("moving-average", {{"points", whole(4)}}, {{"number", std::string("integer")}});
    CHECK(refusal({average}, "f32", "f32") ==
          "number: integers are computed from f32 words (give number = \"float32\", or words of whole numbers)");
    CHECK(refusal({average}, "q15", "f32") ==
          "number: f32 words come from integers (give number = \"float32\", or words of whole numbers)");
}

TEST_CASE("described: what float32 makes unstable is refused") {
    const auto refused = [](double a1, double a2) {
        return refusal(
            {stage(
                "biquad-cascade",
                {{"sections", std::vector<std::vector<double>>{{0.25, 0.0, 0.0, -1.0, 0.5}, {1.0, 0.0, 0.0, a1, a2}}}},
                {})},
            "f32", "f32");
    };
    // 2^-24 below 1 is a float32, 2^-26 below 1 is none.
    CHECK(refused(0.0, 1.0 - 0x1p-24) == "described");
    CHECK(refused(0.0, 1.0 - 0x1p-26) ==
          "number: in float32 the filter is unstable: a1 = 0, a2 = 1 of section 2 put a pole on the unit circle or "
          "outside (design it for a lower rate, or compute it in whole numbers with more bits)");
    const auto comb = [](double feedback) {
        return refusal({stage("comb", {{"delay_samples", whole(3)}, {"feedback", feedback}}, {})}, "f32", "f32");
    };
    CHECK(comb(0.999) == "described");
    CHECK(comb(1.0 - 0x1p-26) ==
          "number: in float32 the filter is unstable: its coefficients put a pole on the unit circle or outside "
          "(design it for a lower rate, or compute it in whole numbers with more bits)");
}

TEST_CASE("described: words of another kind of filter are refused in the stage's own table") {
    const auto misplaced = [](std::string_view kind, std::initializer_list<Given> given,
                              std::initializer_list<Given> own) {
        const auto error = misplaced_word(stage(kind, given, own), words(own));
        return error ? told(*error) : "fine";
    };
    const Given points{"points", whole(4)};
    CHECK(misplaced("moving-average", {points}, {{"structure", std::string("fresh-sum")}}) == "fine");
    CHECK(misplaced("moving-average", {points}, {{"structure", std::string("direct-2")}}) ==
          "structure: a moving average has no structure \"direct-2\" (it has \"running-sum\", \"fresh-sum\")");
    CHECK(misplaced("moving-average", {points}, {{"state_bits", whole(32)}}) ==
          "state_bits: state_bits says nothing of a moving average (leave it out)");
    CHECK(misplaced("moving-average", {points}, {{"multiply_add", std::string("fused")}}) ==
          "multiply_add: multiply_add needs number = \"float32\" (give number = \"float32\", or leave it out)");
    CHECK(
        misplaced("moving-average", {points}, {{"number", std::string("float32")}, {"accumulator_bits", whole(32)}}) ==
        "accumulator_bits: accumulator_bits says nothing of float32 (leave it out)");
    CHECK(misplaced("one-pole", {{"shift_bits", whole(4)}}, {{"coefficient_bits", whole(16)}}) ==
          "coefficient_bits: coefficient_bits says nothing of a one-pole that shifts (leave it out, or give "
          "coefficient with coefficient_fraction_bits)");
    CHECK(misplaced("moving-average", {points}, {{"coefficient_bits", whole(16)}}) ==
          "coefficient_bits: coefficient_bits says nothing of a moving average without a reciprocal (leave it out, or "
          "give division = \"reciprocal\")");
    CHECK(misplaced("moving-average", {points}, {{"summation", std::string("oldest-first")}}) ==
          "summation: summation says nothing of a running sum (leave it out, or give structure = \"fresh-sum\")");
    CHECK(misplaced("fir", {{"taps", std::vector<double>{0.5}}}, {{"rounding_at", std::string("output")}}) ==
          "rounding_at: only sections in direct-1 shorten at the output alone (give rounding_at = \"sum\" or "
          "\"product\")");
}
