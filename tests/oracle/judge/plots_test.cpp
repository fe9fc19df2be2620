// The plots that a case leaves: what a person sees must be what was judged.
#include "oracle/judge/plots.hpp"

#include <bit>
#include <catch2/catch.hpp>
#include <cmath>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

ParameterValues noise_of(std::int64_t length) {
    return values({{"level_ratio", 0.9}, {"length_samples", length}, {"seed", std::int64_t{5}}});
}

Rule half_lsb(const Plan& plan) { return test::rule(plan, "error", values({{"max_lsb", 0.5}})); }

Case noise_case(const Plan& plan, std::int64_t length) {
    return test::a_case(plan, "noise", noise_of(length), {half_lsb(plan), test::implicit_latency()});
}

const PlotCurve& curve(const Plot& plot, PlotCurve::Role role) {
    for (const PlotPanel& panel : plot.panels) {
        for (const PlotCurve& each : panel.curves) {
            if (each.role == role) return each;
        }
    }
    FAIL("no such curve in " << plot.title);
    return plot.panels.front().curves.front();
}

const Plot& titled(const CasePlots& plots, const std::string& part) {
    for (const Plot& plot : plots) {
        if (plot.title.find(part) != std::string::npos) return plot;
    }
    FAIL("no plot has in its title: " << part);
    return plots.front();
}

/// Every curve has a value for each point, in ascending order of x.
void check_shape(const CasePlots& plots) {
    for (const Plot& plot : plots) {
        INFO(plot.title);
        CHECK(std::is_sorted(plot.x.begin(), plot.x.end(), std::less_equal<>()));
        CHECK(plot.x.size() <= 1600);
        for (const PlotPanel& panel : plot.panels) {
            for (const PlotCurve& each : panel.curves) {
                CHECK(each.values.size() == plot.x.size());
                CHECK((each.low.empty() || (each.low.size() == plot.x.size() && each.high.size() == plot.x.size())));
            }
        }
    }
}

bool is_same(const PlotCurve& a, const PlotCurve& b) {
    return std::equal(a.values.begin(), a.values.end(), b.values.begin(), b.values.end(),
                      [](double x, double y) { return x == y || (std::isnan(x) && std::isnan(y)); });
}

}  // namespace

TEST_CASE("plots: a short case is shown sample by sample, with the limits of its error", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, 700);
    auto response = test::right_response(plan, the_case);
    response[300] += 3;
    const CasePlots plots = judge(plan, the_case, response).plots;
    check_shape(plots);
    REQUIRE(plots.size() == 1);
    REQUIRE(plots[0].x.size() == 700);
    CHECK(plots[0].x[300] == 300.0);
    CHECK(plots[0].rate_hz == plan.signal.rate_hz);
    CHECK(plots[0].channel == 0);
    CHECK(plots[0].panels[0].unit == "LSB");
    CHECK(curve(plots[0], PlotCurve::Role::response).values[300] == response[300]);
    const double error = curve(plots[0], PlotCurve::Role::error).values[300];
    CHECK(error == response[300] - curve(plots[0], PlotCurve::Role::reference).values[300]);
    CHECK(error > 2.4);
    REQUIRE(plots[0].panels[1].limits.size() == 1);
    CHECK(*plots[0].panels[1].limits[0].min == -0.5);
    CHECK(*plots[0].panels[1].limits[0].max == 0.5);
    CHECK(plots[0].panels[1].limits[0].verdict == Verdict::fail);
}

TEST_CASE("plots: of a long case no peak is lost, and the largest error is seen sample by sample", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, 40000);
    for (const std::size_t bad : {0UL, 1UL, 17001UL, 39999UL}) {
        auto response = test::right_response(plan, the_case);
        response[bad] += response[bad] > 0 ? -9000 : 9000;
        const CasePlots plots = judge(plan, the_case, response).plots;
        check_shape(plots);
        REQUIRE(plots.size() == 2);
        const auto& overview = curve(plots[0], PlotCurve::Role::error).values;
        CHECK(std::any_of(overview.begin(), overview.end(), [](double error) { return std::fabs(error) > 8999.0; }));
        const Plot& close = titled(plots, "largest error");
        REQUIRE(close.marks.size() == 1);
        CHECK(close.marks[0].x == static_cast<double>(bad));
        CHECK(close.x.front() == std::max(0.0, static_cast<double>(bad) - 64.0));
        CHECK(close.x.back() == std::min(39999.0, static_cast<double>(bad) + 127.0));
        const auto at = static_cast<std::size_t>(static_cast<double>(bad) - close.x.front());
        CHECK(curve(close, PlotCurve::Role::response).values[at] == response[bad]);
        for (const std::size_t block : {1U, 7U, 5000U}) {
            const CasePlots split = judge(plan, the_case, response, block).plots;
            REQUIRE(split.size() == plots.size());
            for (std::size_t i = 0; i < plots.size(); ++i) {
                CHECK(split[i].x == plots[i].x);
                for (const auto role : {PlotCurve::Role::stimulus, PlotCurve::Role::error})
                    CHECK(is_same(curve(split[i], role), curve(plots[i], role)));
            }
        }
    }
}

TEST_CASE("plots: a step is seen from its edge on", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = test::a_case(
        plan, "step",
        values({{"level_ratio", 0.5}, {"at_samples", std::int64_t{3000}}, {"length_samples", std::int64_t{9000}}}),
        {half_lsb(plan), test::implicit_latency()});
    const CasePlots plots = judge(plan, the_case, test::right_response(plan, the_case)).plots;
    check_shape(plots);
    const Plot& step = titled(plots, "step response");
    CHECK(step.x.front() == 2968.0);
    CHECK(step.x.size() == 512);
    const auto& stimulus = curve(step, PlotCurve::Role::stimulus).values;
    CHECK(stimulus[31] == 0.0);
    CHECK(stimulus[32] == 16384.0);
}

TEST_CASE("plots: a late response is shown at the lag that it was judged at", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, 600);
    const auto response = test::delayed(test::right_response(plan, the_case), 2);
    const CaseJudgement judgement = judge(plan, the_case, response);
    REQUIRE(verdict_of(judgement.rules) == CaseVerdict::fail);
    REQUIRE(judgement.plots.size() == 1);
    for (const double error : curve(judgement.plots[0], PlotCurve::Role::error).values) CHECK(std::fabs(error) <= 0.5);
    CHECK(judgement.plots[0].note.find("2 samples later") != std::string::npos);
}

TEST_CASE("plots: what a running case discards is not shown", "[judge]") {
    const Plan plan = test::moving_average_plan();
    Case the_case = noise_case(plan, 700);
    the_case.start = Start::running;
    the_case.start_samples = 100;
    const CasePlots plots = judge(plan, the_case, test::right_response(plan, the_case)).plots;
    REQUIRE(plots.size() == 1);
    CHECK(plots[0].x.front() == 100.0);
    CHECK(plots[0].x.size() == 600);
    CHECK(plots[0].note.find("The first 100 samples are judged by no rule") != std::string::npos);
}

TEST_CASE("plots: what is no number is a gap with a mark, and the place to look at", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Rule rule = test::rule(plan, "error", values({{"max_ratio", 1e-3}}));
    for (const std::int64_t length : {700, 20000}) {
        const Case the_case = test::a_case(plan, "noise", noise_of(length), {rule});
        auto response = test::right_response(plan, the_case);
        response[500] = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
        const CasePlots plots = judge(plan, the_case, response).plots;
        check_shape(plots);
        CHECK(plots[0].panels[1].unit == "of full scale");
        REQUIRE(plots[0].marks.size() == 1);
        CHECK(plots[0].marks[0].text == "not a finite number");
        CHECK(plots[0].marks[0].x <= 500.0);
        const Plot& close = plots.back();
        const auto at = static_cast<std::size_t>(500.0 - close.x.front());
        CHECK(std::isnan(curve(close, PlotCurve::Role::response).values[at]));
        CHECK(std::isfinite(curve(close, PlotCurve::Role::response).values[at + 1]));
        for (const double value : curve(plots[0], PlotCurve::Role::stimulus).values) CHECK(std::isfinite(value));
    }
}

TEST_CASE("plots: each channel has its own, in the unit of the plan", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.signal.channels = 2;
    plan.signal.unit = "g";
    plan.signal.full_scale_unit = 6000.0;
    Case the_case = noise_case(plan, 500);
    the_case.channel = 2;
    const auto response = test::right_response(plan, the_case);
    const CasePlots plots = judge(plan, the_case, response).plots;
    check_shape(plots);
    REQUIRE(plots.size() == 2);
    CHECK(plots[0].channel == 1);
    CHECK(plots[1].channel == 2);
    CHECK(plots[1].panels[0].unit == "g");
    CHECK(plots[1].panels[1].unit == "LSB");
    for (const double value : curve(plots[0], PlotCurve::Role::stimulus).values) CHECK(value == 0.0);
    CHECK(curve(plots[1], PlotCurve::Role::response).values[400] == Approx(response[801] / 32768.0 * 6000.0));
}

TEST_CASE("plots: an unknown filter has stimulus and response, and no error", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.filter_is_unknown = true;
    const Case the_case = test::a_case(plan, "noise", noise_of(500), {});
    const std::vector<Code> response(500, 7);
    const CasePlots plots = judge(plan, the_case, response).plots;
    check_shape(plots);
    REQUIRE(plots.size() == 1);
    REQUIRE(plots[0].panels.size() == 1);
    REQUIRE(plots[0].panels[0].curves.size() == 2);
    CHECK(curve(plots[0], PlotCurve::Role::response).values == std::vector<double>(500, 7.0));
}

TEST_CASE("plots: nobody who does not ask gets any", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, 700);
    CaseJudge judge(plan, the_case);
    judge.add(test::right_response(plan, the_case));
    const auto judgement = judge.finish([](std::int64_t, std::span<Code>) { return Outcome<void>(); });
    REQUIRE(judgement);
    CHECK(judgement->plots.empty());
}
