// The rules that look at the device: its time, its channels, its words.
#include <catch2/catch.hpp>

#include "oracle/rules/rule.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

const RuleContext q15{1200.0, true, 32768.0, 6000.0};

std::string refused(std::string_view kind, const ParameterValues& given, const RuleContext& context = q15) {
    const auto made = make_rule(kind, given, context);
    return made ? "taken" : to_text(made.error());
}

}  // namespace

TEST_CASE("rule deadline: a largest, a share of the period, a percentile", "[judge]") {
    const auto made = make_deadline_rule(
        values({{"max_ticks", 500.0}, {"max_period_ratio", 0.8}, {"percentile", 99.9}, {"max_percentile_ticks", 90.0}}),
        q15);
    REQUIRE(made);
    CHECK(made->max_ticks == 500.0);
    CHECK(made->max_period_ratio == 0.8);
    CHECK(made->percentile == 99.9);
    CHECK(made->max_percentile_ticks == 90.0);
    CHECK(refused("deadline", {}) ==
          "kind: a rule of kind \"deadline\" without a limit judges nothing\n  give max_ticks, max_period_ratio, or "
          "percentile with max_percentile_ticks");
    CHECK(refused("deadline", values({{"percentile", 99.0}})) ==
          "percentile: nothing limits this percentile\n  give max_percentile_ticks; the report shows the median and "
          "99 % anyway");
    CHECK(refused("deadline", values({{"max_percentile_ticks", 99.0}})) ==
          "max_percentile_ticks: nothing says which percentile it limits\n  give percentile, such as 99.9");
    CHECK(refused("deadline", values({{"max_ticks", 90.0}, {"percentile", 99.0}, {"max_percentile_ticks", 99.0}})) ==
          "max_percentile_ticks: 99 is above max_ticks (90), which no sample may exceed\n  lower it, or leave it out");
}

TEST_CASE("rule crosstalk: a largest, a coupling, or both", "[judge]") {
    const auto made = make_crosstalk_rule(values({{"max_lsb", 2.0}, {"max_db", -60.0}}), q15);
    REQUIRE(made);
    CHECK(made->largest == Limit{2.0, Limit::In::lsb});
    CHECK(made->max_db == -60.0);
    CHECK(refused("crosstalk", {}) ==
          "kind: a rule of kind \"crosstalk\" without a limit judges nothing\n  give max_lsb (or max_ratio, max_unit), "
          "max_db, or both");
}

TEST_CASE("rule headroom: none unless the plan says how many, and none of floats", "[judge]") {
    const auto made = make_headroom_rule({}, q15);
    REQUIRE(made);
    CHECK(made->max_clipped_samples == 0.0);
    CHECK(made->max_wrapped_samples == 0.0);
    CHECK(make_headroom_rule(values({{"max_clipped_samples", std::int64_t{3}}}), q15)->max_clipped_samples == 3.0);
    CHECK(refused("headroom", {}, {1200.0, false, 0.0, std::nullopt}) ==
          "kind: an f32 output neither wraps nor clips\n  leave the rule out");
}

TEST_CASE("rules: of these deadline alone needs no reference", "[judge]") {
    CHECK_FALSE(needs_oracle("deadline"));
    CHECK(needs_oracle("crosstalk"));
    CHECK(needs_oracle("headroom"));
}
