#include "runner/world/nearest.hpp"

#include <catch2/catch.hpp>
#include <string>

using namespace halflsb;

TEST_CASE("nearest word: slips of the pen are recognised, other words are not", "[world]") {
    const std::vector<std::string_view> known = {"max_lsb", "rms_lsb", "bias_lsb", "kind"};
    CHECK(nearest_word("max_lbs", known) == "max_lsb");  // neighbours exchanged
    CHECK(nearest_word("max_ls", known) == "max_lsb");
    CHECK(nearest_word("maxlsb", known) == "max_lsb");
    CHECK(nearest_word("Max-LSB", known) == "max_lsb");
    CHECK(nearest_word("knid", known) == "kind");
    CHECK(nearest_word("shape", known).empty());
    CHECK(nearest_word("", known).empty());
    CHECK(nearest_word(std::string(1000, 'x'), known).empty());
    CHECK(nearest_word("kind", {}).empty());
    CHECK(joined_words({}).empty());
    CHECK(joined_words({"a"}) == "a");
    CHECK(joined_words({"a", "b", "c"}) == "a, b or c");
}

TEST_CASE("nearest word: insertions, deletions, substitutions and swaps are near, the first of equals is given",
          "[world]") {
    CHECK(nearest_word("chek", {"check", "chess"}) == "check");
    CHECK(nearest_word("chekc", {"check"}) == "check");
    CHECK(nearest_word("--ring", {"--rig", "--root"}) == "--rig");
    CHECK(nearest_word("b", {"a", "c"}) == "a");
    CHECK(nearest_word("xyz", {"check"}).empty());
}
