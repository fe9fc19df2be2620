#include "oracle/filters/partitioned_fir.hpp"

#include <algorithm>
#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

// The header's bound: transforms of up to 2048 points and their products.
double bound_of(const std::vector<double>& taps, const std::vector<double>& in) {
    double taps_squared = 0.0, in_squared = 0.0;
    for (const double tap : taps) taps_squared += tap * tap;
    // The loudest window of the length of the taps.
    double sum = 0.0;
    for (std::size_t n = 0; n < in.size(); ++n) {
        sum += in[n] * in[n];
        if (n >= taps.size()) sum -= in[n - taps.size()] * in[n - taps.size()];
        in_squared = std::max(in_squared, sum);
    }
    return 20.0 * 0x1p-53 * std::sqrt(taps_squared * in_squared);
}

}  // namespace

TEST_CASE("long fir: the same as in direct form, within the bound", "[filters]") {
    for (const std::size_t count : {65u, 129u, 1024u, 1025u, 3000u, 9000u}) {
        const auto taps = noise(count, 71);
        const auto in = noise(12000, 72);
        PartitionedFirFilter partitioned({taps});
        FirFilter direct({taps});
        const auto out = run(partitioned, in), expected = run(direct, in);
        double largest = 0.0;
        for (std::size_t n = 0; n < in.size(); ++n) largest = std::max(largest, std::fabs(out[n] - expected[n]));
        // The direct form's own error: N 2^-53 of sums that grow with the root of N for noise.
        const double bound = bound_of(taps, in) + 2.0 * std::sqrt(static_cast<double>(count)) * 0x1p-53 *
                                                      std::sqrt(static_cast<double>(count));
        INFO(count << " taps: largest " << largest << ", bound " << bound);
        CHECK(largest < bound);
        CHECK(largest < 1e-12);
    }
}

TEST_CASE("long fir: an impulse at any place returns the taps, each with its own input", "[filters]") {
    const auto taps = noise(2500, 73);
    for (const std::size_t at : {0u, 1u, 63u, 127u, 128u, 129u, 500u}) {
        PartitionedFirFilter filter({taps});
        std::vector<double> in(4000, 0.0);
        in[at] = 1.0;
        const auto out = run(filter, in);
        for (std::size_t n = 0; n < out.size(); ++n) {
            const double expected = n >= at && n - at < taps.size() ? taps[n - at] : 0.0;
            if (!(std::fabs(out[n] - expected) <= 20.0 * 0x1p-53 * std::sqrt(2500.0 / 3.0))) FAIL("sample " << n);
        }
        CHECK(out[at] == taps[0]);  // nothing waits
        CHECK(out.back() == 0.0);   // and all of it ends
    }
}

TEST_CASE("long fir: any split gives the same bits, in place too, and reset equals fresh", "[filters]") {
    const auto in = noise(7001, 74);
    const FilterChain chain{stage(Fir{noise(least_partitioned_taps + 77, 75)})};
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

TEST_CASE("long fir: a chain takes it from the threshold on, with the same output either way", "[filters]") {
    const auto in = noise(6000, 76);
    auto taps = noise(least_partitioned_taps, 77);
    const auto above = run({stage(Fir{taps})}, in);
    PartitionedFirFilter partitioned({taps});
    FirFilter direct({taps});
    CHECK(same_bits(above, run(partitioned, in)));
    CHECK_FALSE(same_bits(above, run(direct, in)));
    taps.pop_back();
    FirFilter shorter({taps});
    CHECK(same_bits(run({stage(Fir{taps})}, in), run(shorter, in)));
}

TEST_CASE("long fir: it starts from a first sample that has gone on for ever", "[filters]") {
    const auto taps = noise(2000, 78);
    FilterStage preloaded = stage(Fir{taps});
    preloaded.initial = Initial::first_sample;
    const auto in = noise(5000, 79);
    std::vector<double> longer(4000, in[0]);
    longer.insert(longer.end(), in.begin(), in.end());
    const auto out = run({preloaded}, in), expected = run({stage(Fir{taps})}, longer);
    double largest = 0.0;
    for (std::size_t n = 0; n < out.size(); ++n) largest = std::max(largest, std::fabs(out[n] - expected[4000 + n]));
    CHECK(largest < 2.0 * bound_of(taps, longer));
}

TEST_CASE("long fir: a NaN is gone one stretch after its window", "[filters]") {
    PartitionedFirFilter filter({noise(1500, 80)});
    std::vector<double> in(6000, 0.5);
    in[700] = std::numeric_limits<double>::quiet_NaN();
    const auto out = run(filter, in);
    CHECK_FALSE(std::isnan(out[699]));
    CHECK(std::isnan(out[700]));
    CHECK(std::isnan(out[700 + 1499]));
    for (std::size_t n = 700 + 1500 + 2048; n < out.size(); ++n) REQUIRE_FALSE(std::isnan(out[n]));
}
