#include "oracle/measure/state_levels.hpp"

#include <limits>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("state levels: the fullest bins, outermost of equals, in order of time", "[measure]") {
    // 0 .. 100: a bin is 1 wide. Two samples in bin 3, one in bin 0; two in bins 97 and 99 each.
    const std::vector<double> samples{3.25, 3.75, 0.0, 20.0, 50.0, 97.5, 97.75, 99.5, 100.0};
    const auto levels = state_levels_of(samples);
    REQUIRE(levels);
    CHECK((levels->first == 3.5 && levels->second == 99.75));
    CHECK(levels->standard_uncertainty == 1.0 / std::sqrt(12.0));
    const std::vector<double> backwards(samples.rbegin(), samples.rend());
    CHECK((state_levels_of(backwards)->first == 99.75 && state_levels_of(backwards)->second == 3.5));
    CHECK_FALSE(state_levels_of(std::vector<double>(9, 1.0)));
    CHECK_FALSE(state_levels_of(std::vector<double>{0.0, 1.0, 1.0, 0.0}));
    CHECK_FALSE(state_levels_of(std::vector<double>{0.0, std::numeric_limits<double>::quiet_NaN(), 1.0}));
    CHECK_FALSE(state_levels_of({}));
}
