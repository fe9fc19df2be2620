#include "oracle/measure/period.hpp"

#include <catch2/catch.hpp>
#include <numeric>

using namespace halflsb;

namespace {

std::vector<Code> repeated(const std::vector<Code>& cycle, std::size_t length) {
    std::vector<Code> codes(length);
    for (std::size_t n = 0; n < length; ++n) codes[n] = cycle[n % cycle.size()];
    return codes;
}

}  // namespace

TEST_CASE("period: the smallest one that repeats once in full", "[measure]") {
    CHECK(smallest_period(repeated({5}, 10)) == 1);
    CHECK(smallest_period(repeated({1, -1}, 9)) == 2);
    CHECK(smallest_period(repeated({3, 1, 4, 1, 5, 9, 2}, 14)) == 7);
    CHECK_FALSE(smallest_period(repeated({3, 1, 4, 1, 5, 9, 2}, 13)));
    CHECK(smallest_period(repeated({1, 1, 2, 1, 1, 2}, 12)) == 3);
    CHECK_FALSE(smallest_period({}));
    const std::vector<Code> one{7};
    CHECK_FALSE(smallest_period(one));
    std::vector<Code> broken = repeated({1, -1}, 40);
    broken[39] = 0;
    CHECK_FALSE(smallest_period(broken));
}

TEST_CASE("period: the watch keeps the last half of what came, and no more than its ring holds", "[measure]") {
    std::vector<Code> codes(5000);
    std::iota(codes.begin(), codes.end(), Code{0});
    for (const std::size_t count : {std::size_t{1}, std::size_t{7}, std::size_t{1024}, std::size_t{1025},
                                    std::size_t{2047}, std::size_t{2048}, std::size_t{4999}}) {
        for (const std::size_t block : {std::size_t{1}, std::size_t{97}, count}) {
            PeriodWatch watch;
            for (std::size_t n = 0; n < count; n += block)
                watch.add(std::span(codes).subspan(n, std::min(block, count - n)));
            const auto stretch = watch.last_stretch();
            REQUIRE(stretch.size() == std::min<std::size_t>((count + 1) / 2, 1024));
            CHECK(std::equal(stretch.begin(), stretch.end(),
                             codes.begin() + static_cast<std::ptrdiff_t>(count - stretch.size())));
        }
    }
}
