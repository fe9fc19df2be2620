#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/corner.hpp"
#include "tests/oracle/filters/make.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

StageContext at(double rate_hz) { return {.rate_hz = rate_hz}; }

}  // namespace

TEST_CASE("corner: coefficients against mpmath at 50 digits", "[filters]") {
    // mpmath 1.2, mp.dps = 50: 1 - exp(-2 pi f / fs), 1 - exp(-1 / (tau fs)).
    struct Row {
        double given, rate_hz, expected;
    };
    for (const Row& row : {Row{10, 1200, 0.05101271384588696515313}, Row{0.05, 1200, 0.0002617651213298022494451},
                           Row{599.9999, 1200, 0.9567860591094671405177}, Row{3, 100, 0.171795818693139989633},
                           Row{1e-6, 1000, 6.283185287440377431762e-9}}) {
        CHECK(smoothing_of_corner(row.given, row.rate_hz) == row.expected);
    }
    for (const Row& row : {Row{0.1, 1200, 0.008298707361124041988503}, Row{2.0, 96000, 0.000005208319769988825261102},
                           Row{1e-5, 1200, 1.0}, Row{1e-9, 1.0, 1.0}}) {
        CHECK(smoothing_of_time_constant(row.given, row.rate_hz) == row.expected);
    }
    // Whole octaves, where the fraction is 0: 1 / (tau fs ln 2) is never whole for doubles but in the limit of long
    // times, whose coefficient is 1 / (tau fs).
    CHECK_THAT(smoothing_of_time_constant(1e9, 1e9), Catch::WithinRel(1e-18, 1e-15));
}

TEST_CASE("corner: the notch against mpmath at 50 digits", "[filters]") {
    struct Row {
        double f, q, fs, b0, b1, a2;
    };
    for (const Row& row :
         {Row{50, 5, 1200, 0.9747710682911325030554, -1.883113099163579948347, 0.9495421365822650061108},
          Row{0.01, 2, 48000, 0.9999996727508723431833, -1.999999345500031213941, 0.9999993455017446863665},
          Row{16.7, 0.7, 100, 0.6175369825391348863121, -0.6152954533945805020987, 0.2350739650782697726242},
          Row{23999, 30, 48000, 0.9999978183432008742247, 1.999995619551709292013, 0.9999956366864017484494}}) {
        const BiquadSection s = notch_section(row.f, row.q, row.fs);
        // Each takes four roundings at most, one of sine or cosine.
        CHECK_THAT(s.b0, Catch::WithinULP(row.b0, 2));
        CHECK_THAT(s.b1, Catch::WithinULP(row.b1, 3));
        CHECK_THAT(s.a2, Catch::WithinULP(row.a2, 3));
        CHECK((s.b2 == s.b0 && s.a1 == s.b1));
    }
}

TEST_CASE("published: the notch kind is that of the Audio EQ Cookbook (SEEN formulas, COMPUTED)",
          "[filters][published]") {
    const CsvTable table("rbj-biquads.csv");
    int notches = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        if (table.text(row, "filter") != "notch") continue;
        ++notches;
        const auto c = [&](const char* name) { return table.number(row, name); };
        const auto made = make("notch", {{"frequency_hz", c("f0 [Hz]")}, {"q", c("Q [")}}, at(c("Fs [Hz]")));
        REQUIRE(made);
        const BiquadSection s = section_of(*made);
        CHECK_THAT(s.b0, Catch::WithinAbs(c("b0"), 5e-16));
        CHECK_THAT(s.b1, Catch::WithinAbs(c("b1"), 5e-16));
        CHECK_THAT(s.b2, Catch::WithinAbs(c("b2"), 5e-16));
        CHECK_THAT(s.a1, Catch::WithinAbs(c("a1"), 5e-16));
        CHECK_THAT(s.a2, Catch::WithinAbs(c("a2"), 5e-16));
    }
    CHECK(notches == 4);
}

TEST_CASE("notch: what is refused", "[filters]") {
    CHECK(make("notch", {{"frequency_hz", 599.9}, {"q", 5.0}}, at(1200)));
    CHECK(refusal("notch", {{"frequency_hz", 600.0}, {"q", 5.0}}, at(1200)) ==
          "frequency_hz: 600 Hz is not below half the sample rate, 600 Hz\n  give less than 600 Hz");
    CHECK(refusal("notch", {{"frequency_hz", 50.0}}, at(1200)) ==
          "q: is missing, and \"notch\" needs it\n  give a number");
    CHECK(refusal("notch", {{"frequency_hz", 50.0}, {"q", 0.0}}, at(1200)) ==
          "q: 0 is below the least, 0.01\n  give 0.01 or more");
    CHECK(refusal("notch", {{"frequency_hz", 1e-8}, {"q", 1e6}}, at(1200)) ==
          "q: 1000000 at 1e-08 Hz at 1200 samples a second makes a notch too narrow for double precision\n"
          "  give a smaller q");
    // a2 = 0.99946 rounds to 1 with 9 fraction bits and with 10.
    CHECK(refusal("notch", {{"frequency_hz", 50.0}, {"q", 480.0}, {"coefficient_fraction_bits", whole(9)}}, at(1200)) ==
          "coefficient_fraction_bits: with 9 fraction bits section 1 is unstable: a1 = -1.931640625, a2 = 1 put a pole "
          "at radius 1\n  store the coefficients with 10 fraction bits or more");
}

TEST_CASE("one-pole: four ways to the same coefficient", "[filters]") {
    const double k = 0x1p-4, rate_hz = 1200.0;
    const double corner_hz = -std::log1p(-k) * rate_hz / (2.0 * 3.14159265358979323846);
    const double time_constant_s = -1.0 / (std::log1p(-k) * rate_hz);
    for (const auto& made : {make("one-pole", {{"coefficient", k}}, at(rate_hz)),
                             make("one-pole", {{"shift_bits", whole(4)}}, at(rate_hz)),
                             make("one-pole", {{"corner_hz", corner_hz}}, at(rate_hz)),
                             make("one-pole", {{"time_constant_s", time_constant_s}}, at(rate_hz))}) {
        REQUIRE(made);
        const BiquadSection s = section_of(*made);
        CHECK_THAT(s.b0, Catch::WithinAbs(k, 3e-17 + 4e-16 * k));  // the given number itself is rounded
        CHECK((s.b1 == 0.0 && s.b2 == 0.0 && s.a2 == 0.0));
        CHECK(s.a1 == s.b0 - 1.0);
        CHECK(made->kind == "one-pole");
    }
}

TEST_CASE("one-pole: the gain at zero frequency is exactly 1, however small the coefficient", "[filters]") {
    for (const double k : {1.0, 0.7, 0.1, 0.001, 1e-6, 1.234567e-9}) {
        const auto made = make("one-pole", {{"coefficient", k}});
        REQUIRE(made);
        CHECK(response_at({*made}, 0.0) == std::complex<double>(1.0, 0.0));
        CHECK_THAT(section_of(*made).b0, Catch::WithinAbs(k, 0x1p-53));
    }
    // And a constant settles at itself: after 50 time constants the rest is 1e-22. It stands where a step of
    // k (x - y) is below half a last bit of y, 2^-54: within 2^-54 / 0.0083.
    const auto made = make("one-pole", {{"time_constant_s", 0.1}}, at(1200));
    CHECK_THAT(run({*made}, std::vector<double>(6000, 0.75)).back(), Catch::WithinAbs(0.75, 7e-15));
}

TEST_CASE("one-pole: -3.01 dB at a corner far below the rate, -2.87 dB at a tenth of it", "[filters]") {
    const auto gain_db = [](double corner_hz) {
        return 20.0 * std::log10(std::abs(
                          response_at({*make("one-pole", {{"corner_hz", corner_hz}}, at(1e6))}, corner_hz * 1e-6)));
    };
    CHECK_THAT(gain_db(10.0), Catch::WithinAbs(-3.0103, 1e-4));
    CHECK_THAT(gain_db(1e5), Catch::WithinAbs(-2.8697697613760176, 1e-12));  // NumPy
}

TEST_CASE("one-pole: the firmware stores k, and the gain stays 1", "[filters]") {
    const auto made = make("one-pole", {{"coefficient", 0.1}, {"coefficient_fraction_bits", whole(4)}});
    REQUIRE(made);
    CHECK(section_of(*made).b0 != 0.125);  // the design is not rounded
    const BiquadSection s = section_of(with_rounded_coefficients(*made));
    CHECK((s.b0 == 0.125 && s.a1 == -0.875));
    // A tie: k = 1.5 steps goes away from zero, and the pole with it, toward zero.
    const auto tie = make("one-pole", {{"coefficient", 0.375}, {"coefficient_fraction_bits", whole(2)}});
    const BiquadSection t = section_of(with_rounded_coefficients(*tie));
    CHECK((t.b0 == 0.5 && t.a1 == -0.5));
    CHECK(refusal("one-pole", {{"coefficient", 0.001}, {"coefficient_fraction_bits", whole(8)}}) ==
          "coefficient_fraction_bits: with 8 fraction bits the coefficient is 0, and the output never moves\n"
          "  store the coefficients with 9 fraction bits or more");
}

TEST_CASE("one-pole: what is refused", "[filters]") {
    const std::string ways = "coefficient, shift_bits, corner_hz or time_constant_s";
    CHECK(refusal("one-pole", {}) == "coefficient: " + ways + " is missing\n  give one of them");
    CHECK(refusal("one-pole", {{"coefficient", 0.5}, {"corner_hz", 3.0}}) ==
          "corner_hz: " + ways + ": more than one is given\n  keep one of them");
    CHECK(make("one-pole", {{"coefficient", 1.0}}));
    CHECK(refusal("one-pole", {{"coefficient", 1.5}}) == "coefficient: 1.5 is above the largest, 1\n  give 1 or less");
    CHECK(refusal("one-pole", {{"coefficient", 0.0}}) ==
          "coefficient: 0 is below the least, 1e-09\n  give 1e-09 or more");
    CHECK(make("one-pole", {{"shift_bits", whole(29)}}));
    CHECK(refusal("one-pole", {{"shift_bits", whole(30)}}) ==
          "shift_bits: 30 bits is above the largest, 29 bits\n  give 29 or less");
    CHECK(make("one-pole", {{"corner_hz", 599.9}}, at(1200)));
    CHECK(refusal("one-pole", {{"corner_hz", 600.0}}, at(1200)) ==
          "corner_hz: 600 Hz is not below half the sample rate, 600 Hz\n  give less than 600 Hz");
    CHECK(make("one-pole", {{"corner_hz", 1.92e-07}}, at(1200)));
    CHECK(refusal("one-pole", {{"corner_hz", 1.9e-07}}, at(1200)) ==
          "corner_hz: 1.9e-07 Hz at 1200 samples a second is less than a filter in double precision follows\n"
          "  give 1.92e-07 Hz or more");
    CHECK(make("one-pole", {{"time_constant_s", 832500.0}}, at(1200)));
    CHECK(refusal("one-pole", {{"time_constant_s", 9e5}}, at(1200)) ==
          "time_constant_s: 900000 s at 1200 samples a second is more than a filter in double precision follows\n"
          "  give 832500 s or less");
}

TEST_CASE("dc blocker: takes an offset out and passes half the rate", "[filters]") {
    const auto plain = make("dc-blocker", {{"pole", 0.75}});
    const auto unity = make("dc-blocker", {{"pole", 0.75}, {"gain", std::string("unity-at-nyquist")}});
    REQUIRE((plain && unity));
    CHECK((section_of(*plain).b0 == 1.0 && section_of(*plain).b1 == -1.0 && section_of(*plain).a1 == -0.75));
    CHECK((section_of(*unity).b0 == 0.875 && section_of(*unity).b1 == -0.875 && section_of(*unity).a1 == -0.75));
    CHECK(std::abs(response_at({*plain}, 0.0)) == 0.0);
    CHECK_THAT(std::abs(response_at({*plain}, 0.5)), Catch::WithinULP(2.0 / 1.75, 2));
    CHECK_THAT(std::abs(response_at({*unity}, 0.5)), Catch::WithinULP(1.0, 2));
    // y[n] = x[n] - x[n-1] + r y[n-1] after a step: r^n.
    const auto out = run({*plain}, std::vector<double>(50, 1.0));
    for (std::size_t n = 0; n < out.size(); ++n)
        REQUIRE_THAT(out[n], Catch::WithinAbs(std::pow(0.75, static_cast<double>(n)), 1e-15));
    const auto corner = make("dc-blocker", {{"corner_hz", 10.0}}, at(1200));
    CHECK(section_of(*corner).a1 == -(1.0 - 0.05101271384588696515313));  // mpmath, as above
}

TEST_CASE("dc blocker: r rounds, and one that becomes 1 is refused", "[filters]") {
    const auto made =
        make("dc-blocker",
             {{"pole", 0.995}, {"gain", std::string("unity-at-nyquist")}, {"coefficient_fraction_bits", whole(7)}});
    REQUIRE(made);
    const BiquadSection s = section_of(with_rounded_coefficients(*made));
    // 0.995 x 128 = 127.36; 0.9975 x 128 = 127.68
    CHECK((s.a1 == -127.0 / 128.0 && s.b0 == 1.0 && s.b1 == -1.0));
    CHECK(refusal("dc-blocker", {{"pole", 0.995}, {"coefficient_fraction_bits", whole(6)}}) ==
          "coefficient_fraction_bits: with 6 fraction bits the pole is 1, and an offset never goes\n"
          "  store the coefficients with 7 fraction bits or more");
}

TEST_CASE("dc blocker: what is refused", "[filters]") {
    CHECK(refusal("dc-blocker", {}) == "pole: pole or corner_hz is missing\n  give one of them");
    CHECK(refusal("dc-blocker", {{"pole", 0.9}, {"corner_hz", 1.0}}) ==
          "corner_hz: pole or corner_hz: both are given\n  keep one of them");
    CHECK(refusal("dc-blocker", {{"pole", 1.0}}) ==
          "pole: 1 is above the largest, 0.999999999\n  give 0.999999999 or less");
    CHECK(refusal("dc-blocker", {{"corner_hz", 700.0}}, at(1200)) ==
          "corner_hz: 700 Hz is not below half the sample rate, 600 Hz\n  give less than 600 Hz");
    CHECK(refusal("dc-blocker", {{"pole", 0.9}, {"gain", std::string("half")}}) ==
          "gain: \"half\" is not a choice\n  choices: plain, unity-at-nyquist");
}
