#include "oracle/rules/silence_rule.hpp"

#include <catch2/catch.hpp>

#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {
const RuleContext q15{1200.0, true, 32768.0, 6000.0};
}

TEST_CASE("rule silence: one limit, in one of its units or derived", "[judge]") {
    CHECK(*make_silence_rule(values({{"max_lsb", 2.0}}), q15)->largest == Limit{2.0, Limit::In::lsb});
    CHECK(*make_silence_rule(values({{"max_unit", 0.5}}), q15)->largest == Limit{0.5, Limit::In::unit});
    CHECK(make_silence_rule(values({{"max_lsb", std::string("derived")}}), q15)->largest->is_derived);
    const auto none = make_silence_rule({}, q15);
    REQUIRE_FALSE(none);
    CHECK(to_text(none.error()) ==
          "kind: a rule of kind \"silence\" without a limit judges nothing\n  give max_lsb (or max_ratio, max_unit); "
          "\"derived\" takes it from the arithmetic");
    CHECK(make_silence_rule(values({{"max_lsb", 2.0}, {"max_ratio", 0.1}}), q15).error().place == "max_ratio");
}
