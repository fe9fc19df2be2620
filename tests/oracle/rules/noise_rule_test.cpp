#include "oracle/rules/noise_rule.hpp"

#include <catch2/catch.hpp>

#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

const RuleContext q15{1200.0, true, 32768.0, 6000.0};

std::string refused(const ParameterValues& given) {
    const auto made = make_noise_rule(given, q15);
    REQUIRE_FALSE(made);
    return to_text(made.error());
}

}  // namespace

TEST_CASE("rule noise: gains in decibels or as ratios, and what the board adds", "[judge]") {
    const auto made = make_noise_rule(values({{"min_gain_db", -12.5},
                                              {"max_gain", 0.07},
                                              {"max_excess_lsb", 0.5},
                                              {"delta_db", 0.2},
                                              {"relative_to", std::string("design")}}),
                                      q15);
    REQUIRE(made);
    CHECK(made->least_gain == GainLimit{-12.5, true});
    CHECK(made->largest_gain == GainLimit{0.07, false});
    CHECK(made->excess == Limit{0.5, Limit::In::lsb});
    CHECK(made->relative_to_design);
    CHECK(made->delta_db == 0.2);
    CHECK_FALSE(make_noise_rule(values({{"max_gain", 0.07}}), q15)->relative_to_design);
}

TEST_CASE("rule noise: without a limit, with one given twice or with limits that cross it is refused", "[judge]") {
    CHECK(refused({}) ==
          "kind: a rule of kind \"noise\" without a limit judges nothing\n  give at least one of min_gain_db, "
          "max_gain_db, min_gain, max_gain and max_excess_lsb (or _ratio, _unit)");
    CHECK(refused(values({{"max_gain_db", -12.0}, {"max_gain", 0.07}})) ==
          "max_gain: the same limit is given twice, as max_gain_db and as max_gain\n  keep one of the two");
    CHECK(refused(values({{"min_gain_db", -11.0}, {"max_gain", 0.07}})) ==
          "min_gain_db: the limits of the noise gain cross: -11 dB is above 0.07\n  exchange them");
    CHECK(make_noise_rule(values({{"min_gain_db", -11.0}, {"max_gain_db", -11.0}}), q15));
}
