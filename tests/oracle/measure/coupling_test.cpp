#include "oracle/measure/coupling.hpp"

#include <cmath>
#include <limits>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/support.hpp"

using namespace halflsb;

namespace {

CouplingFigures measured(const std::vector<std::vector<double>>& references, const std::vector<double>& response,
                         std::size_t block = 4096) {
    CouplingMeasure measure(references.size(), static_cast<std::int64_t>(response.size()));
    for (std::size_t first = 0; first < response.size(); first += block) {
        const std::size_t count = std::min(block, response.size() - first);
        std::vector<std::span<const double>> parts;
        for (const auto& each : references) parts.push_back(std::span(each).subspan(first, count));
        measure.add(parts, std::span(response).subspan(first, count));
    }
    return measure.value();
}

std::vector<double> shifted(const std::vector<double>& x, int lag, double gain, double offset) {
    std::vector<double> y(x.size(), offset);
    for (std::size_t n = 0; n < y.size(); ++n) {
        const auto from = static_cast<std::ptrdiff_t>(n) - lag;
        if (from >= 0 && from < static_cast<std::ptrdiff_t>(x.size())) y[n] += gain * x[static_cast<std::size_t>(from)];
    }
    return y;
}

}  // namespace

TEST_CASE("coupling: a copy is found with its amplitude, its lag and no doubt, under any constant", "[measure]") {
    const auto x = testing::noise(5000, 3);
    for (const int lag : {-32, -5, 0, 1, 32}) {
        for (const double gain : {1.0, -0.25, 1e-4}) {
            const auto found = measured({x}, shifted(x, lag, gain, 0.3));
            INFO("lag " << lag << ", gain " << gain);
            CHECK(found.varies);
            CHECK(found.lag_samples == lag);
            CHECK(found.amplitude.value == Approx(gain).epsilon(1e-6));
            CHECK(found.amplitude.standard_uncertainty < 1e-6 * std::fabs(gain));
            CHECK(std::fabs(found.correlation) == Approx(1.0).epsilon(1e-6));
        }
    }
}

TEST_CASE("coupling: the blocks change nothing", "[measure]") {
    const auto x = testing::noise(3000, 4), other = testing::noise(3000, 5);
    auto y = shifted(x, 2, 0.1, 0.0);
    for (std::size_t n = 0; n < y.size(); ++n) y[n] += 0.01 * other[n];
    const auto whole = measured({x}, y, 3000);
    for (const std::size_t block : {1u, 64u, 65u, 700u}) {
        const auto found = measured({x}, y, block);
        CHECK(found.amplitude.value == whole.amplitude.value);
        CHECK(found.amplitude.standard_uncertainty == whole.amplitude.standard_uncertainty);
    }
}

TEST_CASE("coupling: a leak that bypassed the filter is told by what was sent, not by what the filter returns",
          "[measure]") {
    const auto x = testing::noise(20000, 6);
    std::vector<double> filtered(x.size());
    for (std::size_t n = 0; n < x.size(); ++n) {
        for (std::size_t k = 0; k < 64 && k <= n; ++k) filtered[n] += x[n - k] / 64.0;
    }
    const auto found = measured({x, filtered}, shifted(x, 0, 0.01, 0.0));
    CHECK(found.reference == 0);
    CHECK(found.amplitude.value == Approx(0.01));
    const auto through = measured({x, filtered}, shifted(filtered, 0, 0.01, 0.0));
    CHECK(through.reference == 1);
    CHECK(through.amplitude.value == Approx(0.01));
}

TEST_CASE("coupling: what stands still couples to nothing", "[measure]") {
    const auto x = testing::noise(4000, 7);
    CHECK_FALSE(measured({x}, std::vector<double>(4000, 0.0)).varies);
    CHECK_FALSE(measured({x}, std::vector<double>(4000, 3.1)).varies);
    CHECK_FALSE(measured({std::vector<double>(4000, 1.0)}, x).varies);
    auto bad = x;
    bad[2000] = std::numeric_limits<double>::quiet_NaN();
    CHECK(std::isnan(measured({x}, bad).amplitude.value));
}

TEST_CASE("coupling: the uncertainty is the spread of the amplitude", "[measure]") {
    constexpr int rounds = 200;
    double squares = 0.0, told = 0.0;
    for (int round = 0; round < rounds; ++round) {
        const auto seed = static_cast<std::uint64_t>(100 + round);
        const auto x = testing::noise(4096, seed), own = testing::noise(4096, seed + 100000);
        auto y = shifted(x, 0, 0.5, 0.0);
        for (std::size_t n = 0; n < y.size(); ++n) y[n] += own[n];
        const auto found = measured({x}, y);
        REQUIRE(found.lag_samples == 0);
        squares += (found.amplitude.value - 0.5) * (found.amplitude.value - 0.5);
        told += found.amplitude.standard_uncertainty * found.amplitude.standard_uncertainty;
    }
    // Of 200 squares the mean is known to sqrt(2 / 200) = 10 %; 5 sigma.
    CHECK(squares / told == Approx(1.0).margin(0.5));
}
