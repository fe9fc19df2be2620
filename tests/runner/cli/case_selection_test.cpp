#include "runner/cli/case_selection.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;

namespace {

using Names = std::vector<std::string>;
using Indices = std::vector<std::size_t>;

const Names names{"tare step", "mains hum, half scale", "mains hum, full scale", "dc"};

Indices selected(const Names& patterns) {
    const auto outcome = select_cases(names, patterns);
    REQUIRE(outcome);
    return *outcome;
}

}  // namespace

TEST_CASE("selection: without a pattern every case, else each selected one once in the plan's order", "[cli]") {
    CHECK(selected({}) == Indices{0, 1, 2, 3});
    CHECK(selected({"dc"}) == Indices{3});
    CHECK(selected({"dc", "tare step", "dc"}) == Indices{0, 3});
    CHECK(selected({"mains*"}) == Indices{1, 2});
    CHECK(selected({"mains*", "*"}) == Indices{0, 1, 2, 3});
    CHECK(selected({"d?"}) == Indices{3});
}

TEST_CASE("selection: an exact name wins over what it would match as a pattern", "[cli]") {
    const auto outcome = select_cases({"a*", "ab"}, {"a*"});
    REQUIRE(outcome);
    CHECK(*outcome == Indices{0});
}

TEST_CASE("selection: a pattern that matches nothing lists the names", "[cli]") {
    const auto outcome = select_cases(names, {"dc", "tare stpe"});
    REQUIRE_FALSE(outcome);
    CHECK(outcome.error().kind == ErrorKind::usage);
    CHECK(to_text(outcome.error()) ==
          "--case: no case is named or matched by 'tare stpe'\n"
          "  did you mean 'tare step'? The plan's cases are:\n"
          "    tare step\n"
          "    mains hum, half scale\n"
          "    mains hum, full scale\n"
          "    dc");
    CHECK_FALSE(select_cases(names, {"DC"}));
    CHECK_FALSE(select_cases(names, {"d"}));
    CHECK_FALSE(select_cases({}, {"*"}));
}

TEST_CASE("selection: of many names twenty are listed, escaped", "[cli]") {
    Names many(25, "x\x1b");
    const auto outcome = select_cases(many, {"nothing alike"});
    REQUIRE_FALSE(outcome);
    const std::string text = to_text(outcome.error());
    CHECK(text.find('\x1b') == std::string::npos);
    CHECK(text.substr(text.rfind('\n')) == "\n    and 5 more");
}

TEST_CASE("glob: star for any number of characters, question mark for one", "[cli]") {
    CHECK(matches_glob("", ""));
    CHECK_FALSE(matches_glob("", "a"));
    CHECK(matches_glob("*", ""));
    CHECK(matches_glob("**", "abc"));
    CHECK(matches_glob("a*c", "abbbc"));
    CHECK(matches_glob("a*c", "ac"));
    CHECK_FALSE(matches_glob("a*c", "acb"));
    CHECK(matches_glob("*ab*ab", "abaab"));
    CHECK(matches_glob("?", "ö"));
    CHECK_FALSE(matches_glob("??", "ö"));
    CHECK(matches_glob("*?", "ö"));
    CHECK_FALSE(matches_glob("?", ""));
    CHECK(matches_glob("?", "\xff"));
    CHECK_FALSE(matches_glob("[ab]", "a"));
    // Would take 2^40 steps without care.
    CHECK_FALSE(matches_glob("*a*a*a*a*a*a*a*a*a*a*a*a*a*a*a*a*a*a*a*a*b", std::string(2000, 'a')));
}
