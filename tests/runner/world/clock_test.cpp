#include "runner/world/clock.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;

TEST_CASE("clock: never runs backwards", "[world]") {
    const SystemClock clock;
    Instant before = clock.now();
    for (int k = 0; k < 1000; ++k) {
        const Instant now = clock.now();
        REQUIRE(now >= before);
        before = now;
    }
}

TEST_CASE("clock: UTC in the form of records", "[world]") {
    const std::string text = SystemClock().utc();
    REQUIRE(text.size() == 20);
    const std::string form = "dddd-dd-ddTdd:dd:ddZ";
    for (std::size_t k = 0; k < form.size(); ++k) {
        INFO(text << " at " << k);
        if (form[k] == 'd')
            CHECK((text[k] >= '0' && text[k] <= '9'));
        else
            CHECK(text[k] == form[k]);
    }
    CHECK(text > "2024-01-01T00:00:00Z");
}

TEST_CASE("clock: seconds to durations and back", "[world]") {
    CHECK(seconds(0.25) == std::chrono::milliseconds(250));
    CHECK(to_seconds(std::chrono::milliseconds(1500)) == 1.5);
    CHECK(seconds(-1.0) == -std::chrono::seconds(1));
}
