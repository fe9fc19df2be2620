#include "oracle/filters/cic.hpp"
#include "oracle/filters/rates.hpp"
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::string refused_cic(const char* kind, int order, int factor, int delay = 1) {
    return refusal(kind, {{"order", whole(order)}, {"factor", whole(factor)}, {"delay_samples", whole(delay)}});
}

}  // namespace

TEST_CASE("catalogue: the words of a CIC", "[filters]") {
    const auto down = make("cic-decimator", {{"order", whole(4)}, {"factor", whole(25)}});
    REQUIRE(down);
    const auto& decimator = std::get<CicDecimator>(down->design);
    CHECK((decimator.order == 4 && decimator.factor == 25 && decimator.delay_samples == 1 && !decimator.shift_bits));
    const auto up =
        make("cic-interpolator",
             {{"order", whole(3)}, {"factor", whole(8)}, {"delay_samples", whole(2)}, {"shift_bits", whole(9)}});
    REQUIRE(up);
    const auto& interpolator = std::get<CicInterpolator>(up->design);
    CHECK((interpolator.order == 3 && interpolator.factor == 8 && interpolator.delay_samples == 2 &&
           interpolator.shift_bits == 9));
    CHECK(divisor_of(interpolator) == 512.0);
    CHECK_FALSE(up->coefficient_fraction_bits);
    CHECK(refused_cic("cic-decimator", 0, 25) == "order: 0 is below the least, 1\n  give 1 or more");
    CHECK(refused_cic("cic-decimator", 9, 25) == "order: 9 is above the largest, 8\n  give 8 or less");
    CHECK(refused_cic("cic-interpolator", 3, 1) == "factor: 1 is below the least, 2\n  give 2 or more");
    CHECK(refused_cic("cic-decimator", 1, 4096) == "accepted");
    CHECK(refused_cic("cic-decimator", 1, 4097) == "factor: 4097 is above the largest, 4096\n  give 4096 or less");
    CHECK(refused_cic("cic-decimator", 3, 8, 3) ==
          "delay_samples: 3 samples is above the largest, 2 samples\n  give 2 or less");
}

TEST_CASE("catalogue: a CIC whose gain double precision does not carry is refused with what would do", "[filters]") {
    // 90^8 = 2^51.9, 91^8 = 2^52.06; 256^6 = 2^48, 256^7 = 2^56.
    CHECK(refused_cic("cic-decimator", 8, 90) == "accepted");
    CHECK(refused_cic("cic-decimator", 8, 91) ==
          "order: order 8, factor 91 and delay_samples 1 make a gain of 2^52.06, more than the 2^52 that double "
          "precision carries\n  give order = 7 or less, or factor = 90 or less");
    CHECK(refused_cic("cic-decimator", 8, 256) ==
          "order: order 8, factor 256 and delay_samples 1 make a gain of 2^64, more than the 2^52 that double "
          "precision carries\n  give order = 6 or less, or factor = 90 or less");
    CHECK(refused_cic("cic-decimator", 4, 4096, 2) == "accepted");  // 8192^4 = 2^52
    // R^(N-1) M^N: 171^7 = 2^51.93, 172^7 = 2^51.98, 173^7 = 2^52.04.
    CHECK(refused_cic("cic-interpolator", 8, 172) == "accepted");
    CHECK(refused_cic("cic-interpolator", 8, 173) ==
          "order: order 8, factor 173 and delay_samples 1 make a gain of 2^52.04, more than the 2^52 that double "
          "precision carries\n  give order = 7 or less, or factor = 172 or less");
}

TEST_CASE("catalogue: decimators and interpolators take taps or a file of them", "[filters]") {
    const std::vector<double> taps{0.25, 0.5, 0.25, 0.0};
    for (const char* name : {"taps", "taps_file"}) {
        const auto down = make("fir-decimator", {{name, taps}, {"factor", whole(3)}});
        REQUIRE(down);
        CHECK(std::get<FirDecimator>(down->design).taps == taps);
        CHECK(std::get<FirDecimator>(down->design).factor == 3);
        const auto up = make("fir-interpolator", {{name, taps}, {"factor", whole(2)}});
        REQUIRE(up);
        CHECK(std::get<FirInterpolator>(up->design).taps == taps);
    }
    CHECK(refusal("fir-decimator", {{"factor", whole(3)}}) == "taps: taps or taps_file is missing\n  give one of them");
    CHECK(refusal("fir-decimator", {{"taps", taps}, {"factor", whole(1)}}) ==
          "factor: 1 is below the least, 2\n  give 2 or more");
    CHECK(refusal("fir-decimator", {{"taps", taps}}) ==
          "factor: is missing, and \"fir-decimator\" needs it\n  give a whole number");
    // One tap keeps each factor-th sample: fewer taps than the factor are no mistake.
    CHECK(refusal("fir-decimator", {{"taps", std::vector<double>{1.0}}, {"factor", whole(16)}}) == "accepted");
    CHECK(refusal("fir-decimator", {{"taps", std::vector<double>{0.0}}, {"factor", whole(16)}}) ==
          "taps: all taps are 0\n  at least one tap must differ from 0");
}

TEST_CASE("catalogue: a decimator's phase is one of its factor's inputs", "[filters]") {
    const std::vector<double> taps{0.25, 0.5};
    const auto fir = [&](int phase) {
        return refusal("fir-decimator", {{"taps", taps}, {"factor", whole(4)}, {"phase_samples", whole(phase)}});
    };
    const auto cic = [](int phase) {
        return refusal("cic-decimator", {{"order", whole(2)}, {"factor", whole(4)}, {"phase_samples", whole(phase)}});
    };
    for (int phase = 0; phase < 4; ++phase) CHECK((fir(phase) == "accepted" && cic(phase) == "accepted"));
    const std::string beyond =
        "phase_samples: phase_samples 4 is not one of the 4 inputs of a group, which count from 0\n"
        "  give a number from 0 to 3: 0 returns with the first input, 3 with the last";
    CHECK((fir(4) == beyond && cic(4) == beyond));
    CHECK(fir(-1) == "phase_samples: -1 samples is below the least, 0 samples\n  give 0 or more");
    CHECK(cic(4096) == "phase_samples: 4096 samples is above the largest, 4095 samples\n  give 4095 or less");
    const auto down = make("cic-decimator", {{"order", whole(2)}, {"factor", whole(4)}, {"phase_samples", whole(3)}});
    REQUIRE(down);
    CHECK(std::get<CicDecimator>(down->design).phase_samples == 3);
    const auto kept = make("fir-decimator", {{"taps", taps}, {"factor", whole(4)}, {"phase_samples", whole(2)}});
    REQUIRE(kept);
    CHECK(std::get<FirDecimator>(kept->design).phase_samples == 2);
    CHECK(refusal("cic-interpolator", {{"order", whole(2)}, {"factor", whole(4)}, {"phase_samples", whole(1)}}) !=
          "accepted");
}

TEST_CASE("catalogue: an interpolator whose phases differ in length is refused with the padding", "[filters]") {
    const auto with_taps = [](std::size_t count, const char* name) {
        return refusal("fir-interpolator", {{name, std::vector<double>(count, 0.5)}, {"factor", whole(4)}});
    };
    CHECK(with_taps(8, "taps") == "accepted");
    CHECK(with_taps(7, "taps") ==
          "taps: 7 taps are no multiple of the factor, 4: the phases of the filter would differ in length\n"
          "  put 1 zero behind the last tap");
    CHECK(with_taps(9, "taps_file") ==
          "taps_file: 9 taps are no multiple of the factor, 4: the phases of the filter would differ in length\n"
          "  put 3 zeros behind the last tap");
}

TEST_CASE("catalogue: taps that change the rate are rounded like others", "[filters]") {
    const std::vector<double> taps{0.3, 0.001};
    for (const char* kind : {"fir-decimator", "fir-interpolator"}) {
        CHECK(
            refusal(kind, {{"taps", std::vector<double>{0.001, 0.0}},
                           {"factor", whole(2)},
                           {"coefficient_fraction_bits", whole(8)}}) ==
            "coefficient_fraction_bits: with 8 fraction bits all taps are 0\n  store the coefficients with 9 fraction "
            "bits or more");
        const auto made = make(kind, {{"taps", taps}, {"factor", whole(2)}, {"coefficient_fraction_bits", whole(8)}});
        REQUIRE(made);
        CHECK(made->coefficient_fraction_bits == 8);
    }
}
