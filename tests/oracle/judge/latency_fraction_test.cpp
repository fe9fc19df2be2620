// The fraction of a latency: told where a plan asks for the latency, and held where it has a limit.
#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/judge/certainty.hpp"
#include "oracle/judge/latency_check.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

Case noise_case(const Plan& plan, const ParameterValues& latency, std::int64_t length = 40000) {
    return a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", length}}),
                  {rule(plan, "latency", latency)});
}

ParameterValues latency_words(std::int64_t samples, std::optional<double> fraction = {}) {
    ParameterValues words = values({{"latency_samples", samples}});
    if (fraction) words.set("max_fraction_samples", *fraction);
    return words;
}

}  // namespace

TEST_CASE("latency fraction: of a right board it is none, at whatever whole latency", "[judge]") {
    const Plan plan = moving_average_plan(4);
    for (const int lag : {0, 3}) {
        const Case told = noise_case(plan, latency_words(lag));
        const auto response = delayed(right_response(plan, told), lag);
        const RuleVerdict verdict = judge(plan, told, response).rules[0];
        CHECK(verdict.verdict == Verdict::pass);
        REQUIRE(verdict.figures.size() == 2);
        CHECK(verdict.figures[1].name == "fraction");
        CHECK(verdict.figures[1].unit == "samples");
        CHECK(std::fabs(verdict.figures[1].value.value()) < 1e-3);
        CHECK(verdict.figures[1].uncertainty.value() < 1e-3);
        CHECK_FALSE(verdict.figures[1].limit);
        const RuleVerdict held = judge(plan, noise_case(plan, latency_words(lag, 0.01)), response).rules[0];
        INFO(held.reason << ", " << held.figures[1].value.value() << " +- "
                         << held.figures[1].uncertainty.value_or(-1));
        CHECK(held.verdict == Verdict::pass);
    }
}

TEST_CASE("latency fraction: half a sample passes for a whole latency, and not for its fraction", "[judge]") {
    // The mean of a sample and the one before is half a sample late at every frequency.
    const Plan plan = moving_average_plan(4);
    Plan longer = plan;
    longer.filter[0].design = Fir{{0.125, 0.25, 0.25, 0.25, 0.125}};
    const Case held = noise_case(plan, latency_words(0, 0.25));
    const RuleVerdict verdict =
        judge(plan, held, right_response(longer, noise_case(longer, latency_words(0)))).rules[0];
    CHECK(verdict.verdict == Verdict::fail);
    REQUIRE(verdict.figures.size() == 2);
    CHECK(verdict.figures[1].verdict == Verdict::fail);
    CHECK(verdict.figures[1].limit == 0.25);
}

TEST_CASE("latency fraction: a limit takes its share of alpha, and a stimulus that can tell", "[judge]") {
    const Plan plan = moving_average_plan(4);
    CHECK_FALSE(is_uncertain(rule(plan, "latency", latency_words(0))));
    const Rule asked = rule(plan, "latency", latency_words(0, 0.1));
    CHECK(is_uncertain(asked));
    CHECK(tells_fraction(plan, noise_case(plan, latency_words(0), 1024)));
    CHECK_FALSE(tells_fraction(plan, noise_case(plan, latency_words(0), 1023)));
    const Case step = a_case(plan, "step", values({{"length_samples", std::int64_t{4096}}}), {asked});
    CHECK_FALSE(tells_fraction(plan, step));
    CHECK(judge(plan, step, right_response(plan, step)).rules[0].figures.size() == 1);
}
