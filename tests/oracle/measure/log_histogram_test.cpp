#include "oracle/measure/log_histogram.hpp"

#include <algorithm>
#include <cmath>

#include "tests/oracle/support.hpp"

using namespace halflsb;

TEST_CASE("log histogram: the nearest rank", "[measure]") {
    CHECK(nearest_rank(0.5, 1) == 1);
    CHECK(nearest_rank(0.5, 4) == 2);
    CHECK(nearest_rank(0.99, 100) == 99);
    CHECK(nearest_rank(0.999, 1000) == 999);
    CHECK(nearest_rank(0.9991, 1000) == 1000);
    CHECK(nearest_rank(1.0, 7) == 7);
    CHECK(nearest_rank(0.0, 7) == 1);
}

TEST_CASE("log histogram: every percentile is within 1/512 of the sorted one", "[measure]") {
    const std::uint64_t seed = 11;
    INFO("seed " << seed);
    testing::Random random(seed);
    for (const double octaves : {0.01, 3.0, 40.0}) {
        LogHistogram histogram;
        std::vector<double> all;
        for (int i = 0; i < 5000; ++i) {
            all.push_back(i % 50 == 0 ? 0.0 : std::exp2(random.between(-octaves, octaves)));
            histogram.add(all.back());
        }
        std::sort(all.begin(), all.end());
        CHECK(histogram.smallest() == all.front());
        CHECK(histogram.largest() == all.back());
        for (const double share : {0.0, 0.001, 0.02, 0.1, 0.5, 0.9, 0.99, 0.9999, 1.0}) {
            const double right = all[static_cast<std::size_t>(nearest_rank(share, 5000) - 1)];
            INFO(octaves << " octaves, share " << share);
            CHECK(std::fabs(histogram.quantile(share) - right) <= right / 512.0);
        }
        CHECK(histogram.quantile(1.0) == all.back());
    }
}
