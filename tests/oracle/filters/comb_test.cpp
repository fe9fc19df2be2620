#include "oracle/filters/comb.hpp"

#include <limits>

#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/stability.hpp"
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("comb: echoes of an impulse come at whole delays, in the size of the difference equation", "[filters]") {
    const int delay = GENERATE(1, 2, 5, 1024, 1500);
    const Comb design{delay, 0.75, 0.5, -0.25};  // powers of two: every product is exact
    CombFilter filter(design);
    std::vector<double> in(6 * static_cast<std::size_t>(delay), 0.0);
    in[0] = 1.0;
    const auto out = run(filter, in);
    // h[0] = direct, h[D] = forward - feedback direct, h[k D] = -feedback h[(k - 1) D].
    const double expected[] = {0.75, 0.6875, 0.171875, 0.04296875, 0.0107421875, 0.002685546875};
    for (std::size_t n = 0; n < out.size(); ++n) {
        const auto d = static_cast<std::size_t>(delay);
        REQUIRE(out[n] == (n % d == 0 ? expected[n / d] : 0.0));
    }
}

TEST_CASE("comb: a delay of 1 or 2 is a biquad", "[filters]") {
    const auto in = noise(5000, 71);
    for (const int delay : {1, 2}) {
        const Comb comb{delay, 0.3, -0.8, -0.9};
        const BiquadSection same =
            delay == 1 ? BiquadSection{0.3, -0.8, 0.0, -0.9, 0.0} : BiquadSection{0.3, 0.0, -0.8, 0.0, -0.9};
        const auto a = run({stage(comb)}, in), b = run({stage(BiquadCascade{{same}})}, in);
        // Three roundings a sample and a sum of 1 / (1 - 0.9) of them, of outputs up to 11: 4e-14.
        for (std::size_t n = 0; n < in.size(); ++n) REQUIRE_THAT(a[n], Catch::WithinAbs(b[n], 4e-14));
        for (const double f : {0.0, 0.01, 0.2, 0.5}) {
            CHECK(std::abs(response_at({stage(comb)}, f) - response_at({stage(BiquadCascade{{same}})}, f)) < 4e-14);
        }
        CHECK_THAT(pole_radius(comb), Catch::WithinRel(pole_radius(same), 1e-15));
    }
}

TEST_CASE("comb: the closed form keeps its digits where a pole lies near the unit circle", "[filters]") {
    using Long = std::complex<long double>;
    constexpr long double pi = 3.14159265358979323846264338327950288L;
    for (const double feedback : {-0.9999999, 0.9999999}) {
        const Comb comb{50, 1.0, 0.25, feedback};
        for (const double f : {0.0, 1e-9, 0.01, 0.02 + 1e-9, 0.03, 0.25, 0.49, 0.5}) {
            const Long turn = std::polar(1.0L, -2.0L * pi * std::fmod(50.0L * static_cast<long double>(f), 1.0L));
            const Long exact = (1.0L + 0.25L * turn) / (1.0L + static_cast<long double>(feedback) * turn);
            const auto got = response_at({stage(comb)}, f);
            // The long evaluation rounds its angle by 2^-62 and divides by 1e-7: 2.2e-12.
            CHECK(std::abs(Long(got.real(), got.imag()) - exact) < 3e-12L * std::abs(exact));
        }
    }
}

TEST_CASE("comb: silence decays to exactly 0 and passes through no subnormal state", "[filters]") {
    CombFilter filter({3, 1.0, 0.0, -0.5});
    std::vector<double> in(4000, 0.0);
    in[0] = 1.0;
    const auto out = run(filter, in);
    CHECK(out[3 * 600] > 0.0);  // 2^-600 is above what is dropped
    CHECK(out.back() == 0.0);
    for (const double y : out) REQUIRE(std::fpclassify(y) != FP_SUBNORMAL);
}

TEST_CASE("comb: the words of a plan, and those that cannot be", "[filters]") {
    const auto made = make("comb", {{"delay_samples", whole(24)}, {"forward", -1.0}});
    REQUIRE(made);
    const Comb& comb = std::get<Comb>(made->design);
    CHECK((comb.delay_samples == 24 && comb.direct == 1.0 && comb.forward == -1.0 && comb.feedback == 0.0));
    CHECK(made->kind == "comb");
    CHECK(make("comb", {{"delay_samples", whole(65536)}, {"feedback", std::nextafter(1.0, 0.0)}}));
    CHECK(refusal("comb", {{"delay_samples", whole(65537)}, {"forward", 1.0}}) ==
          "delay_samples: 65537 samples is above the largest, 65536 samples\n  give 65536 or less");
    CHECK(refusal("comb", {{"delay_samples", whole(0)}, {"forward", 1.0}}) ==
          "delay_samples: 0 samples is below the least, 1 samples\n  give 1 or more");
    CHECK(refusal("comb", {{"forward", 1.0}}) ==
          "delay_samples: is missing, and \"comb\" needs it\n  give a whole number");
    CHECK(refusal("comb", {{"delay_samples", whole(2)}, {"feedback", -1.21}}) ==
          "feedback: the comb is unstable: feedback = -1.21 puts its poles at radius 1.1\n"
          "  feedback must lie between -1 and 1, both left out: 0.999 would do");
    CHECK(refusal("comb", {{"delay_samples", whole(2)}, {"feedback", 1.0}}) ==
          "feedback: the comb is unstable: feedback = 1 puts its poles at radius 1\n"
          "  feedback must lie between -1 and 1, both left out: 0.999 would do");
    CHECK(refusal("comb", {{"delay_samples", whole(2)}, {"direct", 0.0}, {"feedback", 0.5}}) ==
          "direct: the comb passes nothing: direct = 0, forward = 0\n  direct, forward or both must differ from 0");
    CHECK(refusal("comb", {{"delay_samples", whole(2)}}) ==
          "delay_samples: nothing is delayed: forward = 0, feedback = 0\n"
          "  give forward, feedback or both; a gain alone is a fir of one tap");
}

TEST_CASE("comb: its three coefficients round, and a pole that rounds onto the circle is refused", "[filters]") {
    const auto made = make("comb", {{"delay_samples", whole(3)},
                                    {"direct", 0.3},
                                    {"forward", -0.3},
                                    {"feedback", 0.9},
                                    {"coefficient_fraction_bits", whole(2)}});
    REQUIRE_FALSE(made);
    CHECK(to_text(made.error()) ==
          "coefficient_fraction_bits: with 2 fraction bits the comb is unstable: feedback = 1 puts its poles at "
          "radius 1\n  store the coefficients with 3 fraction bits or more");
    const Comb rounded = std::get<Comb>(with_rounded_coefficients(stage(Comb{3, 0.3, -0.3, 0.9}, 3)).design);
    CHECK((rounded.direct == 0.25 && rounded.forward == -0.25 && rounded.feedback == 0.875));
}
