#include <limits>

#include "oracle/filters/coefficients.hpp"
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

using Rows = std::vector<std::vector<double>>;

}  // namespace

TEST_CASE("catalogue: each kind and parameter has its words", "[filters]") {
    std::vector<std::string_view> kinds;
    for (const Recipe& recipe : filter_recipes()) {
        kinds.push_back(recipe.name);
        CHECK_FALSE(recipe.help.empty());
        for (const Parameter& parameter : recipe.parameters) {
            INFO(recipe.name << "." << parameter.name);
            CHECK_FALSE(parameter.help.empty());
            CHECK(parameter.help.back() == '.');
            if (parameter.type == ParameterType::choice) continue;
            CHECK(parameter.minimum < parameter.maximum);
            CHECK(parameter.maximum < no_limit);
        }
    }
    CHECK(kinds == std::vector<std::string_view>{"moving-average",
                                                 "fir",
                                                 "biquad-cascade",
                                                 "iir",
                                                 "one-pole",
                                                 "dc-blocker",
                                                 "notch",
                                                 "comb",
                                                 "median",
                                                 "cic-decimator",
                                                 "cic-interpolator",
                                                 "fir-decimator",
                                                 "fir-interpolator",
                                                 "windowed-sinc",
                                                 "butterworth",
                                                 "chebyshev",
                                                 "audio-eq",
                                                 "weighting",
                                                 "octave-band",
                                                 "unknown"});
    const Parameter* points = find_parameter(*find_recipe(filter_recipes(), "moving-average"), "points");
    CHECK((points->required && points->minimum == 1.0 && points->maximum == 65536.0 && points->unit == "samples"));
    const Parameter* bits = find_parameter(*find_recipe(filter_recipes(), "fir"), "coefficient_fraction_bits");
    CHECK((!bits->required && bits->minimum == 0.0 && bits->maximum == 62.0 && bits->unit == "bits"));
    const Parameter* file = find_parameter(*find_recipe(filter_recipes(), "biquad-cascade"), "sections_file");
    CHECK(file->type == ParameterType::file);
}

TEST_CASE("catalogue: a moving average takes 1 to 65536 points", "[filters]") {
    for (const int points : {1, 16, 65536}) {
        const auto outcome = make("moving-average", {{"points", whole(points)}});
        REQUIRE(outcome);
        CHECK(std::get<MovingAverage>(outcome->design).points == points);
        CHECK_FALSE(outcome->coefficient_fraction_bits);
    }
    const std::string remedy = "\n  give a whole number from 1 to 65536";
    CHECK(refusal("moving-average", {{"points", whole(0)}}) == "points: 0 points" + remedy);
    CHECK(refusal("moving-average", {{"points", whole(65537)}}) == "points: 65537 points" + remedy);
    CHECK(refusal("moving-average", {}) == "points: points is missing" + remedy);
    CHECK(refusal("moving-average", {{"points", 2.5}}) == "points: not a whole number" + remedy);
}

TEST_CASE("catalogue: taps come from the plan or from a file, under their own name", "[filters]") {
    const std::vector<double> taps{0.25, 0.5, 0.25};
    for (const char* name : {"taps", "taps_file"}) {
        const auto outcome = make("fir", {{name, taps}, {"coefficient_fraction_bits", whole(15)}});
        REQUIRE(outcome);
        CHECK(std::get<Fir>(outcome->design).taps == taps);
        CHECK(outcome->coefficient_fraction_bits == 15);
    }
    CHECK(refusal("fir", {}) == "taps: taps or taps_file is missing\n  give one of them");
    CHECK(refusal("fir", {{"taps", taps}, {"taps_file", taps}}) ==
          "taps_file: taps or taps_file: both are given\n  keep one of them");
}

TEST_CASE("catalogue: taps that are none are refused", "[filters]") {
    using Numbers = std::vector<double>;
    CHECK(refusal("fir", {{"taps", Numbers{}}}) == "taps: 0 taps\n  give 1 to 65536 taps");
    CHECK(refusal("fir", {{"taps_file", Numbers(65537, 0.1)}}) == "taps_file: 65537 taps\n  give 1 to 65536 taps");
    CHECK(make("fir", {{"taps_file", Numbers(65536, 0.1)}}));
    CHECK(refusal("fir", {{"taps", Numbers{0.0, -0.0}}}) ==
          "taps: all taps are 0\n  at least one tap must differ from 0");
    const std::string remedy = " is no coefficient\n  give numbers from -1e+09 to 1e+09";
    CHECK(refusal("fir", {{"taps_file", Numbers{1.0, std::numeric_limits<double>::quiet_NaN()}}}) ==
          "taps_file: nan" + remedy);
    CHECK(refusal("fir", {{"taps", Numbers{-2e9}}}) == "taps: -2e+09" + remedy);
    CHECK(make("fir", {{"taps", Numbers{-1e9}}}));
}

TEST_CASE("catalogue: taps that all round to 0 are refused with the bits that would do", "[filters]") {
    const std::vector<double> taps{0.001, -0.0004};  // 0.001 reaches half a step at 2^-9: 0.00098
    CHECK(refusal("fir", {{"taps", taps}, {"coefficient_fraction_bits", whole(8)}}) ==
          "coefficient_fraction_bits: with 8 fraction bits all taps are 0\n  store the coefficients with 9 fraction "
          "bits or more");
    CHECK(make("fir", {{"taps", taps}, {"coefficient_fraction_bits", whole(9)}}));
    CHECK(refusal("fir", {{"taps", std::vector<double>{1e-30}}, {"coefficient_fraction_bits", whole(62)}}) ==
          "coefficient_fraction_bits: with 62 fraction bits all taps are 0\n"
          "  no number of fraction bits up to 62 is enough: scale the coefficients");
    const std::string remedy = "\n  give a whole number from 0 to 62";
    CHECK(refusal("fir", {{"taps", taps}, {"coefficient_fraction_bits", whole(63)}}) ==
          "coefficient_fraction_bits: 63 is out of range" + remedy);
    CHECK(refusal("fir", {{"taps", taps}, {"coefficient_fraction_bits", whole(-1)}}) ==
          "coefficient_fraction_bits: -1 is out of range" + remedy);
}

TEST_CASE("catalogue: sections have five numbers, or six with a0 = 1", "[filters]") {
    const auto five = make("biquad-cascade", {{"sections", Rows{{1, 2, 3, -0.5, 0.25}}}});
    const auto six = make("biquad-cascade", {{"sections", Rows{{1, 2, 3, 1, -0.5, 0.25}}}});
    const auto file =
        make("biquad-cascade", {{"sections_file", std::vector<double>{1, 2, 3, -0.5, 0.25, 1, 0, 0, 0, 0}}});
    REQUIRE((five && six && file));
    for (const auto* outcome : {&five, &six, &file}) {
        const BiquadSection& s = std::get<BiquadCascade>((*outcome)->design).sections.front();
        CHECK((s.b0 == 1.0 && s.b1 == 2.0 && s.b2 == 3.0 && s.a1 == -0.5 && s.a2 == 0.25));
    }
    CHECK(std::get<BiquadCascade>(file->design).sections.size() == 2);
    CHECK(refusal("biquad-cascade", {{"sections", Rows{{1, 0, 0, 0, 0}, {1, 2, 3, 2, -0.5, 0.25}}}}) ==
          "sections: section 2 has a0 = 2\n  divide its six numbers by a0, so that a0 = 1, or leave a0 out");
    CHECK(refusal("biquad-cascade", {{"sections", Rows{{1, 0, 0, 0}}}}) ==
          "sections: section 1 has 4 numbers\n  a section is [b0, b1, b2, a1, a2] or [b0, b1, b2, 1, a1, a2]");
    CHECK(refusal("biquad-cascade", {{"sections_file", std::vector<double>(6, 0.1)}}) ==
          "sections_file: 6 numbers are no whole number of sections\n"
          "  write five numbers a section: b0, b1, b2, a1, a2 (a0 is 1 and left out)");
    CHECK(refusal("biquad-cascade", {{"sections", Rows{}}}) == "sections: 0 sections\n  give 1 to 64 sections");
    CHECK(refusal("biquad-cascade", {{"sections", Rows(65, {1, 0, 0, 0, 0})}}) ==
          "sections: 65 sections\n  give 1 to 64 sections");
    CHECK(make("biquad-cascade", {{"sections", Rows(64, {1, 0, 0, 0, 0})}}));
    CHECK(refusal("biquad-cascade", {}) == "sections: sections or sections_file is missing\n  give one of them");
    CHECK(refusal("biquad-cascade", {{"sections", Rows{{1, 0, 0, 0, std::numeric_limits<double>::infinity()}}}}) ==
          "sections: inf is no coefficient\n  give numbers from -1e+09 to 1e+09");
    CHECK(
        refusal("biquad-cascade", {{"sections", Rows{{0, 0, 0, -0.5, 0.25}}}}) ==
        "sections: section 1 passes nothing: b0 = 0, b1 = 0, b2 = 0\n  at least one of b0, b1, b2 must differ from 0");
}

TEST_CASE("catalogue: an unstable section is refused with its number and pole radius", "[filters]") {
    const std::string where =
        "\n  poles must lie inside the unit circle, where y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] - a1 y[n-1] - a2 "
        "y[n-2]";
    CHECK(refusal("biquad-cascade", {{"sections", Rows{{1, 0, 0, -0.5, 0}, {1, 0, 0, 0, 1.21}}}}) ==
          "sections: section 2 is unstable: a1 = 0, a2 = 1.21 put a pole at radius 1.1" + where);
    CHECK(refusal("biquad-cascade", {{"sections", Rows{{1, 0, 0, 0, 1}}}}) ==
          "sections: section 1 is unstable: a1 = 0, a2 = 1 put a pole at radius 1" + where);
    // Written for y = ... + a1 y[n-1] + a2 y[n-2]: the usual mistake with tables made for firmware.
    CHECK(refusal("biquad-cascade", {{"sections_file", std::vector<double>{0.1, 0.2, 0.1, 1.5, -0.7}}}) ==
          "sections_file: section 1 is unstable: a1 = 1.5, a2 = -0.7 put a pole at radius 1.87361025" + where +
              "; with the signs of all a1 and a2 turned round the cascade is stable");
}

TEST_CASE("catalogue: coefficients that round to an unstable or silent section are refused with the bits that would do",
          "[filters]") {
    // A pole pair at radius 0.999: a2 = 0.998 rounds to 1 with 7 fraction bits.
    const BiquadSection s{0.01, 0.02, 0.01, -1.9, 0.998};
    const Rows rows{{s.b0, s.b1, s.b2, s.a1, s.a2}};
    CHECK(
        refusal("biquad-cascade", {{"sections", rows}, {"coefficient_fraction_bits", whole(7)}}) ==
        "coefficient_fraction_bits: with 7 fraction bits section 1 is unstable: a1 = -1.8984375, a2 = 1 put a pole at "
        "radius 1\n  store the coefficients with 8 fraction bits or more");
    CHECK(make("biquad-cascade", {{"sections", rows}, {"coefficient_fraction_bits", whole(8)}}));
    const Rows quiet{{0.001, 0.002, 0.001, -1.0, 0.5}};
    CHECK(refusal("biquad-cascade", {{"sections", quiet}, {"coefficient_fraction_bits", whole(7)}}) ==
          "coefficient_fraction_bits: with 7 fraction bits section 1 passes nothing: b0 = 0, b1 = 0, b2 = 0\n"
          "  store the coefficients with 8 fraction bits or more");
}

TEST_CASE("catalogue: the advised number of fraction bits works, and so does every larger one", "[filters]") {
    const std::uint64_t seed = 4711;
    INFO("seed " << seed);
    Random random(seed);
    int refused = 0;
    for (int design = 0; design < 300; ++design) {
        const double f = std::pow(10.0, random.between(-4.0, -0.7));
        const BiquadSection s = cookbook(Shape::low_pass, f, random.between(0.5, 30.0));
        const Rows rows{{s.b0, s.b1, s.b2, s.a1, s.a2}};
        const auto outcome = make("biquad-cascade", {{"sections", rows}, {"coefficient_fraction_bits", whole(10)}});
        if (outcome) continue;
        ++refused;
        const std::string& remedy = outcome.error().remedy;
        const int enough = std::stoi(remedy.substr(std::string("store the coefficients with ").size()));
        CHECK(enough > 10);
        CHECK_FALSE(make("biquad-cascade", {{"sections", rows}, {"coefficient_fraction_bits", whole(enough - 1)}}));
        for (int bits = enough; bits <= 62; ++bits) {
            CHECK(make("biquad-cascade", {{"sections", rows}, {"coefficient_fraction_bits", whole(bits)}}));
        }
    }
    CHECK(refused > 50);
}

TEST_CASE("catalogue: an unknown kind is refused with the known ones", "[filters]") {
    CHECK(refusal("wavelet", {}) ==
          "kind: \"wavelet\" is no filter kind\n  known kinds: moving-average, fir, biquad-cascade, iir, one-pole, "
          "dc-blocker, notch, comb, median, cic-decimator, cic-interpolator, fir-decimator, fir-interpolator, "
          "windowed-sinc, butterworth, chebyshev, audio-eq, weighting, octave-band, "
          "unknown");
}
