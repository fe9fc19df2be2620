#include "oracle/filters/fir.hpp"

#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("fir: an impulse returns the taps", "[filters]") {
    const std::size_t length = GENERATE(1u, 2u, 15u, 16u, 17u, 64u, 3000u, 65536u);
    const auto taps = noise(length, 11);
    FirFilter filter({taps});
    std::vector<double> in(length + 40, 0.0);
    in[3] = 1.0;
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < out.size(); ++n) {
        const double expected = n >= 3 && n < 3 + length ? taps[n - 3] : 0.0;
        if (out[n] != expected) FAIL("sample " << n);
    }
}

TEST_CASE("fir: each output is summed from the newest sample back, bit for bit", "[filters]") {
    const std::size_t length = GENERATE(1u, 7u, 16u, 33u, 2500u);
    const auto taps = noise(length, 12);
    const auto in = noise(6000, 13);
    FirFilter filter({taps});
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < in.size(); ++n) {
        double sum = 0.0;
        for (std::size_t k = 0; k < length; ++k) sum += taps[k] * (k <= n ? in[n - k] : 0.0);
        if (sum != out[n]) FAIL("sample " << n);
    }
}

TEST_CASE("fir: a full-scale input of the worst signs reaches the L1 norm", "[filters]") {
    const auto taps = noise(50, 14);
    std::vector<double> in(50);
    double norm = 0.0;
    for (std::size_t k = 0; k < 50; ++k) {
        in[49 - k] = taps[k] < 0.0 ? -1.0 : 1.0;
        norm += std::fabs(taps[k]);
    }
    FirFilter filter({taps});
    CHECK(run(filter, in).back() == norm);
    CHECK(l1_norm({stage(Fir{taps})}) == norm);
}

TEST_CASE("fir: a NaN is gone after as many samples as there are taps", "[filters]") {
    FirFilter filter({std::vector<double>(20, 0.25)});
    std::vector<double> in(100, 0.0);
    in[30] = std::numeric_limits<double>::quiet_NaN();
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < out.size(); ++n) REQUIRE(std::isnan(out[n]) == (n >= 30 && n < 50));
}
