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
          "  did you mean 'tare step'? the plan's cases are:\n"
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

TEST_CASE("labels: any of those asked for, within what --case selects", "[cli]") {
    const std::vector<Names> labels{{"quick"}, {"quick", "slow"}, {}, {"slow"}};
    const Indices all{0, 1, 2, 3};
    CHECK(*select_labelled(all, labels, {}) == all);
    CHECK(*select_labelled(all, labels, {"quick"}) == Indices{0, 1});
    CHECK(*select_labelled(all, labels, {"quick", "slow"}) == Indices{0, 1, 3});
    CHECK(*select_labelled({1, 2}, labels, {"quick"}) == Indices{1});
}

TEST_CASE("labels: one that no case has, or that leaves nothing, is a usage error with the labels there are", "[cli]") {
    const std::vector<Names> labels{{"quick"}, {"slow", "quick"}, {}};
    const auto unknown = select_labelled({0, 1, 2}, labels, {"quik"});
    REQUIRE_FALSE(unknown);
    CHECK(unknown.error().kind == ErrorKind::usage);
    CHECK(to_text(unknown.error()) ==
          "--label: no case has the label 'quik'\n  did you mean 'quick'? the plan's labels are: quick, slow");
    const auto nothing = select_labelled({0}, labels, {"slow"});
    REQUIRE_FALSE(nothing);
    CHECK(to_text(nothing.error()) ==
          "--label: none of the cases that --case selects has such a label\n  the plan's labels are: quick, slow");
    CHECK(to_text(select_labelled({0}, {{}}, {"x"}).error()) ==
          "--label: no case has the label 'x'\n  the plan's cases have no labels");
}
