// Noise: its range, its statistics at a stated false-alarm rate. The seeds are fixed, so a test here
// either always passes or always fails; the rate is that of a wrong verdict when someone changes the
// generator to another correct one. Each limit is five standard deviations of its statistic, 6e-7.
#include <algorithm>
#include <array>
#include <cmath>

#include "make.hpp"

using namespace halflsb;

namespace {

constexpr std::size_t count = 1'000'000;

std::vector<double> drawn(const char* distribution, double level, std::int64_t seed) {
    const auto noise = made("noise", {{"length_samples", std::int64_t{count}},
                                      {"level_ratio", level},
                                      {"distribution", std::string(distribution)},
                                      {"seed", seed}});
    return ratios_of(*noise, 0, count);
}

struct Moments {
    double mean = 0.0, variance = 0.0, fourth = 0.0, neighbour_correlation = 0.0;
};

Moments moments_of(const std::vector<double>& values) {
    Moments moments;
    const auto n = static_cast<double>(values.size());
    for (const double value : values) moments.mean += value / n;
    for (std::size_t i = 0; i < values.size(); ++i) {
        const double d = values[i] - moments.mean;
        moments.variance += d * d / n;
        moments.fourth += d * d * d * d / n;
        if (i > 0) moments.neighbour_correlation += d * (values[i - 1] - moments.mean) / n;
    }
    moments.neighbour_correlation /= moments.variance;
    return moments;
}

/// Chi-square of the values in `cells` cells of equal probability; `cumulative` is their distribution.
template <class Cumulative>
double chi_square(const std::vector<double>& values, std::size_t cells, Cumulative cumulative) {
    std::vector<double> seen(cells, 0.0);
    for (const double value : values) {
        seen[std::min(cells - 1, static_cast<std::size_t>(cumulative(value) * static_cast<double>(cells)))] += 1.0;
    }
    const double expected = static_cast<double>(values.size()) / static_cast<double>(cells);
    double sum = 0.0;
    for (const double each : seen) sum += (each - expected) * (each - expected) / expected;
    return sum;
}

}  // namespace

TEST_CASE("uniform noise: mean, variance and independence of neighbours", "[stimuli]") {
    const std::int64_t seed = GENERATE(std::int64_t{0}, std::int64_t{77}, std::int64_t{9007199254740991});
    INFO("seed " << seed);
    const double level = 0.8, n = count;
    const auto values = drawn("uniform", level, seed);
    const Moments moments = moments_of(values);
    const double variance = level * level / 3.0;
    CHECK(std::abs(moments.mean) < 5.0 * std::sqrt(variance / n));
    // The variance of a squared uniform is 4/45 level^4.
    CHECK(std::abs(moments.variance - variance) < 5.0 * level * level * std::sqrt(4.0 / 45.0 / n));
    CHECK(std::abs(moments.neighbour_correlation) < 5.0 / std::sqrt(n));
    CHECK(std::all_of(values.begin(), values.end(), [&](double v) { return v >= -level && v < level; }));
    // Chi-square of 999 degrees: mean 999, standard deviation sqrt(1998) = 44.7.
    CHECK(chi_square(values, 1000, [&](double v) { return (v / level + 1.0) / 2.0; }) < 999.0 + 5.0 * 44.7);
    CHECK(chi_square(values, 1000, [&](double v) { return (v / level + 1.0) / 2.0; }) > 999.0 - 5.0 * 44.7);
}

TEST_CASE("normal noise: mean, rms, fourth moment and shape", "[stimuli]") {
    const std::int64_t seed = GENERATE(std::int64_t{0}, std::int64_t{77}, std::int64_t{9007199254740991});
    INFO("seed " << seed);
    const double level = 0.2, n = count;
    const auto values = drawn("normal", level, seed);
    const Moments moments = moments_of(values);
    CHECK(std::abs(moments.mean) < 5.0 * level / std::sqrt(n));
    CHECK(std::abs(moments.variance / (level * level) - 1.0) < 5.0 * std::sqrt(2.0 / n));
    CHECK(std::abs(moments.neighbour_correlation) < 5.0 / std::sqrt(n));
    // E z^4 = 3, E z^8 = 105, so z^4 has variance 96.
    CHECK(std::abs(moments.fourth / std::pow(level, 4) - 3.0) < 5.0 * std::sqrt(96.0 / n));
    const auto cumulative = [&](double v) { return std::erfc(-v / level / std::sqrt(2.0)) / 2.0; };
    const double chi = chi_square(values, 1000, cumulative);
    CHECK(chi < 999.0 + 5.0 * 44.7);
    CHECK(chi > 999.0 - 5.0 * 44.7);
    // Beyond 4 sigma with probability 6.334e-5: 63.3 of a million, standard deviation 8.
    std::size_t far = 0;
    for (const double value : values) far += std::abs(value) > 4.0 * level;
    CHECK(std::abs(static_cast<double>(far) - 63.3) < 40.0);
}

TEST_CASE("noise: seeds and purposes are unrelated", "[stimuli]") {
    const auto one = drawn("uniform", 1.0, 1);
    const auto two = drawn("uniform", 1.0, 2);
    double product = 0.0;
    for (std::size_t i = 0; i < count; ++i) product += one[i] * two[i];
    // Products of independent uniforms have variance 1/9.
    CHECK(std::abs(product) < 5.0 * std::sqrt(count / 9.0));
}

TEST_CASE("noise: it covers the whole band, and without a level a quarter of full scale", "[stimuli]") {
    const auto noise = made("noise", {{"length_samples", std::int64_t{1000}}});
    REQUIRE(noise->spectrum().bands.size() == 1);
    CHECK(noise->spectrum().bands[0].from_cycles_per_sample == 0.0);
    CHECK(noise->spectrum().bands[0].to_cycles_per_sample == 0.5);
    double largest = 0.0;
    for (const double ratio : ratios_of(*noise, 0, 1000)) largest = std::max(largest, std::abs(ratio));
    CHECK(largest <= 0.25);
    CHECK(largest > 0.24);  // missed by 1000 samples with probability 0.96^1000, 2e-18
}

TEST_CASE("normal noise: beyond full scale the codes saturate", "[stimuli]") {
    const auto noise =
        made("noise",
             {{"length_samples", std::int64_t{1000}}, {"distribution", std::string("normal")}, {"level_ratio", 1.0}});
    const auto codes = codes_of(*noise, "q15", 0, 1000);
    const auto top = std::count(codes.begin(), codes.end(), 32767);
    const auto bottom = std::count(codes.begin(), codes.end(), -32768);
    // One in 6.3 on either side: 158.7 of 1000, standard deviation 11.6.
    CHECK(std::abs(static_cast<double>(top) - 158.7) < 58.0);
    CHECK(std::abs(static_cast<double>(bottom) - 158.7) < 58.0);
}
