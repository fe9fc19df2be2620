#include "stimuli/outcome.hpp"

#include <catch2/catch.hpp>
#include <memory>

#include "stimuli/block.hpp"

using namespace halflsb;

TEST_CASE("outcome: it holds the value or the error, and says which", "[stimuli]") {
    Outcome<std::string> good = std::string("value");
    REQUIRE(good);
    CHECK(good.value() == "value");
    CHECK(good->size() == 5);
    Outcome<std::string> bad = Error{ErrorKind::bench, "/dev/ttyUSB0", "the board is silent", "Is it powered?"};
    REQUIRE_FALSE(bad);
    CHECK(bad.error().kind == ErrorKind::bench);
    CHECK(to_text(bad.error()) == "/dev/ttyUSB0: the board is silent\n  Is it powered?");
    Outcome<std::unique_ptr<int>> moved = std::make_unique<int>(4);
    const std::unique_ptr<int> owner = std::move(moved).value();
    CHECK(*owner == 4);
}

TEST_CASE("outcome: success without a value", "[stimuli]") {
    CHECK(Outcome<void>());
    const Outcome<void> bad = Error{ErrorKind::output, "", "no space left", ""};
    REQUIRE_FALSE(bad);
    CHECK(to_text(bad.error()) == "no space left");
}

TEST_CASE("block: it ends behind its last sample", "[stimuli]") {
    int samples[3] = {1, 2, 3};
    const Block<int> block{10'000'000'000, samples};
    CHECK(block.end_index() == 10'000'000'003);
    CHECK(Block<int>{}.end_index() == 0);
}
