#include "oracle/filters/moving_average.hpp"

#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("moving average: an impulse comes out as 1/M for M samples, then 0", "[filters]") {
    const int points = GENERATE(1, 2, 3, 16, 1000);
    MovingAverageFilter filter({points});
    std::vector<double> in(3000, 0.0);
    in[5] = 1.0;
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < out.size(); ++n) {
        const bool inside = n >= 5 && n < 5 + static_cast<std::size_t>(points);
        REQUIRE(out[n] == (inside ? 1.0 / points : 0.0));
    }
}

TEST_CASE("moving average: a unit step climbs by 1/M a sample", "[filters]") {
    // COMPUTED: y[n] = (n + 1) / M for 0 <= n < M, then 1. Sums of ones are exact, so equality holds.
    const int points = GENERATE(2, 5, 16, 64);
    MovingAverageFilter filter({points});
    const auto out = run(filter, std::vector<double>(200, 1.0));
    for (std::size_t n = 0; n < out.size(); ++n) {
        REQUIRE(out[n] == std::min<double>(static_cast<double>(n) + 1.0, points) / points);
    }
}

TEST_CASE("moving average: codes give the mean correctly rounded, however long the record", "[filters]") {
    // Integer arithmetic is the reference: sums of codes are exact in 64 bits, and in double as well.
    const std::int64_t points = GENERATE(3, 16, 1000, 65536);
    const std::int64_t top = GENERATE(std::int64_t{32767}, std::int64_t{2147483647});
    const std::uint64_t seed = 20261201;
    INFO("seed " << seed);
    Random random(seed);
    MovingAverageFilter filter({static_cast<int>(points)});
    std::vector<std::int64_t> codes(300000);
    std::vector<double> in;
    for (auto& code : codes) {
        code = random.whole(-top - 1, top);
        in.push_back(static_cast<double>(code));
    }
    // A stretch of bottom codes: the largest sum there is.
    for (std::size_t n = 100000; n < 170000; ++n) in[n] = static_cast<double>(codes[n] = -top - 1);
    const auto out = run(filter, in);
    std::int64_t sum = 0;
    for (std::size_t n = 0; n < out.size(); ++n) {
        sum += codes[n];
        if (n >= static_cast<std::size_t>(points)) sum -= codes[n - static_cast<std::size_t>(points)];
        if (out[n] != static_cast<double>(sum) / static_cast<double>(points)) FAIL("sample " << n);
    }
}

TEST_CASE("moving average: nothing of a long past remains", "[filters]") {
    // Numbers with 52-bit fractions, whose sums do round; a running sum would keep the residue.
    MovingAverageFilter filter({37});
    (void)run(filter, noise(1000000, 7));
    const auto out = run(filter, std::vector<double>(100, 0.0));
    CHECK(out[35] != 0.0);
    for (std::size_t n = 36; n < out.size(); ++n) REQUIRE(out[n] == 0.0);
}

TEST_CASE("moving average: the error stays within (M + 1) 2^-53 of the mean magnitude", "[filters]") {
    const std::size_t points = 1000;
    const auto in = noise(20000, 3);
    MovingAverageFilter filter({static_cast<int>(points)});
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < in.size(); ++n) {
        long double sum = 0.0L, magnitude = 0.0L;
        for (std::size_t k = 0; k < points && k <= n; ++k) {
            sum += static_cast<long double>(in[n - k]);
            magnitude += std::fabs(static_cast<long double>(in[n - k]));
        }
        // The header's bound, and the rounding of the reference itself (M 2^-64, less than one term).
        const long double bound = static_cast<long double>(points + 2) * 0x1p-53L * magnitude / points;
        const long double deviation = std::fabs(static_cast<long double>(out[n]) - sum / points);
        if (!(deviation <= bound)) FAIL("sample " << n << " deviates by " << static_cast<double>(deviation));
    }
}

TEST_CASE("moving average: a NaN is gone after M samples", "[filters]") {
    MovingAverageFilter filter({10});
    std::vector<double> in(40, 1.0);
    in[13] = std::numeric_limits<double>::quiet_NaN();
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < out.size(); ++n) REQUIRE(std::isnan(out[n]) == (n >= 13 && n < 23));
    CHECK(out[23] == 1.0);
}

TEST_CASE("moving average: one point passes the input on", "[filters]") {
    MovingAverageFilter filter({1});
    const auto in = noise(1000, 4);
    CHECK(same_bits(run(filter, in), in));
}
