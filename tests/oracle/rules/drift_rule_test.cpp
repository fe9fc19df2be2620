#include "oracle/rules/drift_rule.hpp"

#include <catch2/catch.hpp>

#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {
const RuleContext q15{1200.0, true, 32768.0, 6000.0};
}

TEST_CASE("rule drift: a slope or a change, in one of their units", "[judge]") {
    const auto made = make_drift_rule(values({{"max_slope_unit_per_hour", 2.0}, {"max_change_lsb", 3.0}}), q15);
    REQUIRE(made);
    CHECK(made->slope == Limit{2.0, Limit::In::unit});
    CHECK(made->change == Limit{3.0, Limit::In::lsb});
    const auto none = make_drift_rule({}, q15);
    REQUIRE_FALSE(none);
    CHECK(to_text(none.error()) ==
          "kind: a rule of kind \"drift\" without a limit judges nothing\n  give max_slope_lsb_per_hour or "
          "max_change_lsb (or their ratio and unit words)");
}

TEST_CASE("rule drift: full scale ends a change, not a slope", "[judge]") {
    CHECK(make_drift_rule(values({{"max_slope_lsb_per_hour", 1e6}}), q15));
    CHECK(make_drift_rule(values({{"max_change_lsb", 1e6}}), q15).error().place == "max_change_lsb");
}
