#include "oracle/measure/batch_sums.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;
using Complex = std::complex<double>;

TEST_CASE("batch sums: neighbours become one when all batches are full, and nothing is lost", "[measure]") {
    BatchSums sums(2, 4);
    for (int part = 1; part <= 37; ++part) {
        const double value = part;
        const std::vector<Complex> cross{{value, 1.0}, {0.0, -value}};
        const std::vector<double> power{1.0, value};
        sums.add(cross, power);
        CHECK(sums.parts() == part);
        CHECK(sums.batches() <= 4);
        // Once there were four, there are always more than two.
        if (part >= 4) CHECK(sums.batches() >= 3);
        Complex total_cross;
        double total_power = 0.0;
        for (std::size_t batch = 0; batch < sums.batches(); ++batch) {
            total_cross += sums.cross(batch, 0);
            total_power += sums.power(batch, 1);
            // Whole numbers add up exactly; each full batch holds as many parts as the next.
            if (batch + 1 < sums.batches()) CHECK(sums.power(batch, 0) == static_cast<double>(sums.parts_a_batch()));
        }
        CHECK(total_cross == Complex(value * (value + 1.0) / 2.0, value));
        CHECK(total_power == value * (value + 1.0) / 2.0);
    }
    // 37 parts: 1, 2, 4, 8 and at last 16 a batch.
    CHECK(sums.parts_a_batch() == 16);
    CHECK(sums.batches() == 3);
    // In order of time: the first sixteen are in the first.
    CHECK(sums.cross(0, 0) == Complex(136.0, 16.0));
}
