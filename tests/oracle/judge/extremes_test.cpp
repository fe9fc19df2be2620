#include "oracle/judge/extremes.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <random>

#include "tests/support/rounds.hpp"

using namespace halflsb;

namespace {

/// The same, looking at all samples of the bucket.
Extremes seen_in(const std::vector<double>& samples, std::size_t begin, std::size_t end) {
    Extremes seen;
    std::vector<double> finite;
    for (std::size_t i = begin; i < end; ++i) {
        if (std::isfinite(samples[i]))
            finite.push_back(samples[i]);
        else
            seen.has_gap = true;
    }
    if (finite.empty()) return seen;
    const auto low = std::min_element(finite.begin(), finite.end()), high = std::max_element(finite.begin(), finite.end());
    seen.low = *low;
    seen.high = *high;
    seen.low_comes_first = low <= high;
    return seen;
}

}  // namespace

TEST_CASE("extremes: each bucket has the lowest and the highest of its samples, in their order", "[judge]") {
    const auto seed = std::random_device()();
    INFO("seed " << seed);
    std::mt19937 random(seed);
    for (int round = 0; round < test::rounds_of(300); ++round) {
        const std::size_t most = 2 * (1 + random() % 20), length = random() % 2000;
        const bool has_gaps = random() % 2 == 0;
        std::vector<double> samples;
        for (std::size_t i = 0; i < length; ++i)
            samples.push_back(has_gaps && random() % 5 == 0 ? NAN : static_cast<double>(random() % 50) - 25.0);
        ThinnedSamples<1> thinned(most);
        for (const double sample : samples) thinned.add({sample});
        REQUIRE(thinned.buckets().size() <= most);
        if (length >= most) CHECK(thinned.buckets().size() > most / 2);
        std::size_t begin = 0;
        for (std::size_t i = 0; i < thinned.buckets().size(); ++i) {
            const std::size_t end = begin + static_cast<std::size_t>(thinned.samples_in(i));
            const Extremes expected = seen_in(samples, begin, end), got = thinned.buckets()[i][0];
            CHECK(got.has_gap == expected.has_gap);
            CHECK(got.is_empty() == expected.is_empty());
            CHECK(got.low == expected.low);
            CHECK(got.high == expected.high);
            if (expected.low < expected.high) CHECK(got.low_comes_first == expected.low_comes_first);
            begin = end;
        }
        CHECK(begin == length);
    }
}

TEST_CASE("extremes: infinities are gaps, not peaks", "[judge]") {
    Extremes ends;
    for (const double value : {1.0, HUGE_VAL, -HUGE_VAL, -2.0}) ends.add(value);
    CHECK(ends.has_gap);
    CHECK(ends.low == -2.0);
    CHECK(ends.high == 1.0);
    CHECK_FALSE(ends.low_comes_first);
}
