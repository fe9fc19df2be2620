#include "runner/world/toml_quoted.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;

TEST_CASE("toml_quoted: a text of TOML may hold anything", "[world]") {
    CHECK(toml_quoted("a\"b\\c") == "\"a\\\"b\\\\c\"");
    CHECK(toml_quoted("\n\x1b\x7f") == "\"\\u000a\\u001b\\u007f\"");
    CHECK(toml_quoted("K\xC3\xA4se\xff") == "\"K\xC3\xA4se\xEF\xBF\xBD\"");
}
