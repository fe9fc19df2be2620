#include "oracle/filters/median.hpp"

#include <algorithm>
#include <limits>

#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

// Sorts every window afresh.
double by_sorting(std::span<const double> in, std::size_t n, std::size_t points) {
    std::vector<double> window(points, 0.0);
    for (std::size_t k = 0; k < points && k <= n; ++k) window[k] = in[n - k];
    std::sort(window.begin(), window.end());
    return points % 2 == 1 ? window[points / 2] : (window[points / 2 - 1] + window[points / 2]) / 2.0;
}

}  // namespace

TEST_CASE("median: the middle of the window, of an even number the mean of the middle two", "[filters]") {
    MedianFilter three({3}), four({4});
    const std::vector<double> in{5.0, 1.0, 9.0, 7.0, 7.0, -3.0};
    // By hand, zeros before the start.
    CHECK(run(three, in) == std::vector<double>{0.0, 1.0, 5.0, 7.0, 7.0, 7.0});
    CHECK(run(four, in) == std::vector<double>{0.0, 0.5, 3.0, 6.0, 7.0, 7.0});
}

TEST_CASE("median: equals sorting every window, ties and all", "[filters]") {
    const std::uint64_t seed = 20261204;
    INFO("seed " << seed);
    Random random(seed);
    for (const std::size_t points : {1u, 2u, 3u, 8u, 31u, 100u, 255u}) {
        std::vector<double> in(1500);
        // Few values make many ties; then fine ones.
        for (std::size_t n = 0; n < in.size(); ++n)
            in[n] = n < 800 ? static_cast<double>(random.whole(-3, 3)) : random.ratio();
        MedianFilter filter({static_cast<int>(points)});
        const auto out = run(filter, in);
        for (std::size_t n = 0; n < in.size(); ++n) {
            if (out[n] != by_sorting(in, n, points)) FAIL("sample " << n << " of " << points << " points");
        }
    }
}

TEST_CASE("median: the largest window there is", "[filters]") {
    MedianFilter filter({4096});
    std::vector<double> in(6000);
    for (std::size_t n = 0; n < in.size(); ++n) in[n] = static_cast<double>((n * 2654435761u) % 65536u);
    const auto out = run(filter, in);
    for (const std::size_t n : {0u, 1000u, 2047u, 2048u, 4095u, 5999u}) CHECK(out[n] == by_sorting(in, n, 4096));
}

TEST_CASE("median: any split gives the same bits, in place too, and reset equals fresh", "[filters]") {
    const auto in = noise(3001, 21);
    const FilterChain chain{stage(Median{10})};
    const auto whole = run(chain, in);
    const auto filter = make_filter(chain);
    for (const Split split : every_split) {
        filter->reset();
        std::vector<double> out = in;
        for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
            const auto block = std::span(out).subspan(first, count);
            filter->process(block, block);
        });
        CHECK(same_bits(out, whole));
    }
}

TEST_CASE("median: a NaN shows while it is in the window", "[filters]") {
    MedianFilter filter({5});
    std::vector<double> in(20, 1.0);
    in[7] = in[9] = std::numeric_limits<double>::quiet_NaN();
    const auto out = run(filter, in);
    for (std::size_t n = 0; n < out.size(); ++n) REQUIRE(std::isnan(out[n]) == (n >= 7 && n < 14));
    CHECK(out[14] == 1.0);
    filter.preload(std::numeric_limits<double>::quiet_NaN());
    CHECK(std::isnan(run(filter, std::vector<double>(4, 1.0)).back()));
    CHECK(run(filter, std::vector<double>{1.0})[0] == 1.0);
}

TEST_CASE("median: it is not linear, and says so", "[filters]") {
    CHECK(is_linear({}));
    CHECK(is_linear({stage(MovingAverage{4}), stage(Fir{{1.0}})}));
    const FilterChain chain{stage(MovingAverage{4}), stage(Median{3}), stage(Fir{{0.5, -2.0}})};
    CHECK_FALSE(is_linear(chain));
    CHECK(std::isnan(std::abs(response_at(chain, 0.1))));
    // The largest output: the mean stays within 1, so does the median, the FIR makes 2.5 of it.
    CHECK(l1_norm(chain) == 2.5);
    CHECK(largest_pole_radius(chain) == 0.0);
}

TEST_CASE("median: after the flush nothing of the past is left", "[filters]") {
    const BiquadCascade low{{cookbook(Shape::low_pass, 0.02, 0.7)}};
    const double half_step = 0x1p-16;
    const FilterChain chains[] = {{stage(Median{9})},
                                  {stage(MovingAverage{16}), stage(Median{9}), stage(Fir{{1.0, 2.0, 3.0}})},
                                  {stage(low), stage(Median{9}), stage(low)},
                                  {stage(FirDecimator{noise(8, 1), 4}), stage(Median{9}), stage(MovingAverage{3})}};
    for (const FilterChain& chain : chains) {
        const auto zeros = flush_samples(chain, 1.0, half_step);
        REQUIRE(zeros);
        Random random(3);
        double largest = 0.0;
        for (int trial = 0; trial < 20; ++trial) {
            std::vector<double> in(1000 + static_cast<std::size_t>(*zeros) + 1000, 0.0);
            for (std::size_t n = 0; n < 1000; ++n) in[n] = trial == 0 ? 1.0 : random.bits() % 2 == 0 ? 1.0 : -1.0;
            const auto filter = make_filter(chain);
            const std::size_t before = filter->outputs_for(1000 + static_cast<std::size_t>(*zeros));
            std::vector<double> out(filter->outputs_for(in.size()));
            filter->process(in, out);
            for (std::size_t m = before; m < out.size(); ++m) largest = std::max(largest, std::fabs(out[m]));
        }
        CHECK(largest < half_step);
    }
    CHECK(*flush_samples({stage(Median{9})}, 1.0, half_step) == 8);
}

TEST_CASE("median: 1 to 4096 points", "[filters]") {
    CHECK(refusal("median", {{"points", whole(1)}}) == "accepted");
    CHECK(refusal("median", {{"points", whole(4096)}}) == "accepted");
    CHECK(refusal("median", {{"points", whole(0)}}) ==
          "points: 0 samples is below the least, 1 samples\n  give 1 or more");
    CHECK(refusal("median", {{"points", whole(4097)}}) ==
          "points: 4097 samples is above the largest, 4096 samples\n  give 4096 or less");
}
