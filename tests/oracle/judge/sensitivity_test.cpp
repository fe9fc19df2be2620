// Whether rules would see a firmware that decided otherwise: the changed twin, judged as a board.
#include "oracle/judge/sensitivity.hpp"

#include <algorithm>
#include <catch2/catch.hpp>

#include "tests/oracle/support.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

Plan biquad_plan(double corner, double q, int bits) {
    Plan plan = test::moving_average_plan();
    plan.filter[0].design = BiquadCascade{{testing::cookbook(testing::Shape::low_pass, corner, q)}};
    plan.filter[0].kind = "biquad-cascade";
    plan.filter[0].coefficient_fraction_bits = bits;
    plan.filter[0].arithmetic.rounding = Rounding::half_up;
    return plan;
}

/// Noise of +-4000 codes, under rules of these kinds.
void add_case(Plan& plan, const std::string& rule_kind) {
    const Rule rule = rule_kind == "exact" ? test::rule(plan, "exact", {})
                                           : test::rule(plan, "error",
                                                        values({{"max_lsb", std::string("derived")},
                                                                {"rms_lsb", std::string("derived")},
                                                                {"bias_lsb", std::string("derived")}}));
    plan.cases.push_back(test::a_case(
        plan, "noise", values({{"level_codes", std::int64_t{4000}}, {"length_samples", std::int64_t{16384}}}), {rule}));
}

const ChangeSeen& change_named(const Sensitivity& found, std::string_view name) {
    const auto at = std::find_if(found.changes.begin(), found.changes.end(),
                                 [&](const ChangeSeen& change) { return change.change == name; });
    REQUIRE(at != found.changes.end());
    return *at;
}

}  // namespace

// faults.md A01: a floor shifts the mean by half the gain from the rounding to the output, whatever Q and corner; the
// largest error alone misses it where the poles are sharp.
TEST_CASE("sensitivity: truncation instead of rounding is seen by derived limits at nine corners and Qs", "[judge]") {
    for (const double q : {0.7, 3.0, 10.0}) {
        for (const double corner : {0.1, 0.02, 0.004}) {
            for (const int bits : {14, 30}) {
                INFO("Q " << q << ", corner " << corner << ", " << bits << " bits");
                Plan plan = biquad_plan(corner, q, bits);
                add_case(plan, "error");
                const Sensitivity found = sensitivity(plan, {0});
                CHECK(found.unknown.empty());
                CHECK(found.failing_rule.empty());  // what keeps the promise passes
                const ChangeSeen& floor = change_named(found, "floor in place of half-up");
                CHECK(floor.answer == ChangeSeen::Answer::seen);
                CHECK(floor.rule == "error");
                CHECK(floor.case_name == "a case");
            }
        }
    }
}

TEST_CASE("sensitivity: what makes no difference with these stimuli is told as such", "[judge]") {
    Plan plan = biquad_plan(0.1, 0.7, 14);
    add_case(plan, "exact");
    const Sensitivity found = sensitivity(plan, {0});
    const ChangeSeen& wraps = change_named(found, "an output that wraps");
    CHECK(wraps.answer == ChangeSeen::Answer::same);  // 4000 codes never reach the rails
    CHECK(wraps.differing == 0);
    const ChangeSeen& floor = change_named(found, "floor in place of half-up");
    CHECK(floor.answer == ChangeSeen::Answer::seen);
    CHECK(floor.rule == "exact");
    CHECK(floor.differing > 0);
}

TEST_CASE("sensitivity: a wide limit sees nothing of a truncation, and says so", "[judge]") {
    Plan plan = biquad_plan(0.1, 0.7, 14);
    plan.cases.push_back(test::a_case(
        plan, "noise", values({{"level_codes", std::int64_t{4000}}, {"length_samples", std::int64_t{4096}}}),
        {test::rule(plan, "error", values({{"max_lsb", 50.0}}))}));
    const ChangeSeen floor = change_named(sensitivity(plan, {0}), "floor in place of half-up");
    CHECK(floor.answer == ChangeSeen::Answer::unseen);
    CHECK(floor.differing > 0);
    CHECK(floor.largest_lsb >= 1.0);
}

TEST_CASE("sensitivity: without a stated rounding nothing is known", "[judge]") {
    Plan plan = test::moving_average_plan();
    add_case(plan, "error");
    const Sensitivity found = sensitivity(plan, {0});
    CHECK(found.unknown == "rounding is not said");
    CHECK(found.changes.empty());
}

TEST_CASE("sensitivity: of a very long fir fewer samples are looked at", "[judge]") {
    const auto samples = [](std::size_t taps) {
        return sensitivity_samples({FilterStage{Fir{std::vector<double>(taps, 0.01)}, std::nullopt, {}, "fir"}});
    };
    CHECK(samples(3) == 131072);
    CHECK(samples(1023) == 131072);
    CHECK(samples(4095) == 32768);
    CHECK(samples(65536) == 2047);
}
