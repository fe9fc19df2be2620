#include "oracle/rules/companion_rules.hpp"

#include <catch2/catch.hpp>

#include "oracle/rules/rule.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

const RuleContext q15{1200.0, true, 32768.0, 6000.0};

ParameterValues list(const std::string& word, std::vector<double> numbers) {
    return values({{word, std::move(numbers)}});
}

}  // namespace

TEST_CASE("rules repeat, blocks, shift: what is left out, and what is sent again", "[judge]") {
    CHECK_FALSE(make_repeat_rule({}, q15)->largest);
    CHECK(*make_repeat_rule(values({{"max_lsb", 2.0}}), q15)->largest == Limit{2.0, Limit::In::lsb});
    const auto again = companions_of(*make_repeat_rule({}, q15));
    REQUIRE(again.size() == 1);
    CHECK(again[0].terms == std::vector<CompanionTerm>{{1, 0}});
    CHECK(again[0].name == "repeat");

    CHECK(make_blocks_rule({}, q15)->block_samples == std::vector<std::int64_t>{1});
    const auto blocks = companions_of(*make_blocks_rule(list("block_samples", {1.0, 7.0}), q15));
    REQUIRE(blocks.size() == 2);
    CHECK(blocks[1].block_samples == 7);
    CHECK(blocks[0].text == "in blocks of 1 sample");
    CHECK(blocks[1].name == "blocks 7");

    CHECK(make_shift_rule({}, q15)->by_samples == std::vector<std::int64_t>{1});
    const auto later = companions_of(*make_shift_rule(list("by_samples", {3.0}), q15));
    REQUIRE(later.size() == 1);
    CHECK(later[0].terms == std::vector<CompanionTerm>{{1, 3}});
    CHECK(later[0].shortest_delay_samples() == 3);
    CHECK(later[0].text == "3 samples later");
}

TEST_CASE("rule linearity: -1 when nothing is said, ratios and sums else", "[judge]") {
    const auto plain = make_linearity_rule({}, q15);
    CHECK(plain->by_ratio == std::vector<std::int64_t>{-1});
    CHECK(plain->by_samples.empty());
    CHECK_FALSE(plain->largest);
    CHECK_FALSE(plain->bias);
    const auto sum = make_linearity_rule(
        values({{"by_samples", std::vector<double>{9.0}}, {"max_unit", 0.5}, {"bias_lsb", 0.25}}), q15);
    CHECK(sum->by_ratio.empty());
    CHECK(*sum->largest == Limit{0.5, Limit::In::unit});
    CHECK(*sum->bias == Limit{0.25, Limit::In::lsb});
    const auto companions = companions_of(*sum);
    REQUIRE(companions.size() == 1);
    CHECK(companions[0].terms == std::vector<CompanionTerm>{{1, 0}, {1, 9}});
    CHECK(companions[0].shortest_delay_samples() == 0);
    CHECK(companions[0].longest_delay_samples() == 9);
    CHECK(companions[0].name == "linearity, 9 later added");

    CHECK(to_text(make_linearity_rule(list("by_ratio", {2.0, 0.0}), q15).error()) ==
          "by_ratio: 0 times the stimulus is silence\n  give -1, or 2");
    CHECK(make_linearity_rule(values({{"max_lsb", 2.0}, {"max_ratio", 0.1}}), q15).error().place == "max_ratio");
}

TEST_CASE("rules about companions: each number once, and not too many", "[judge]") {
    CHECK(to_text(make_blocks_rule(list("block_samples", {7.0, 1.0, 7.0}), q15).error()) ==
          "block_samples: 7 is there twice\n  keep one of the two");
    std::vector<double> many;
    for (int i = 1; i <= 17; ++i) many.push_back(i);
    CHECK(to_text(make_shift_rule(list("by_samples", many), q15).error()) ==
          "by_samples: 17 numbers, and each sends the stimulus once more\n  give at most 16");
    many.pop_back();
    CHECK(make_shift_rule(list("by_samples", many), q15)->by_samples.size() == 16);
}

TEST_CASE("rules about companions need no oracle, and no other kind asks for companions", "[judge]") {
    for (const Recipe& recipe : rule_recipes()) {
        const bool compares =
            recipe.name == "repeat" || recipe.name == "blocks" || recipe.name == "shift" || recipe.name == "linearity";
        CAPTURE(recipe.name);
        if (compares || recipe.name == "unchanged") CHECK_FALSE(needs_oracle(recipe.name));
        if (recipe.name == "error" || recipe.name == "response") CHECK(needs_oracle(recipe.name));
        if (!compares) continue;
        const auto rule = make_rule(recipe.name, {}, q15);
        REQUIRE(rule);
        CHECK(companions_of(*rule).size() == 1);
    }
    CHECK(companions_of(Rule{LatencyRule{0, true}, {}}).empty());
}
