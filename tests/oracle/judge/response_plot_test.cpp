#include "oracle/judge/response_plot.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::judge;
using test::values;

namespace {

using Bands = std::vector<std::vector<double>>;

Rule band_rule(const Plan& plan, Bands bands) {
    return test::rule(plan, "response", values({{"bands", std::move(bands)}}));
}

const Plot& gain_plot(const CaseJudgement& judgement) {
    REQUIRE_FALSE(judgement.plots.empty());
    REQUIRE(judgement.plots.back().over == Plot::Over::frequency);
    return judgement.plots.back();
}

const PlotCurve& curve(const PlotPanel& panel, PlotCurve::Role role) {
    return *std::find_if(panel.curves.begin(), panel.curves.end(),
                         [&](const PlotCurve& each) { return each.role == role; });
}

Case noise_case(const Plan& plan, std::int64_t length, Bands bands) {
    return test::a_case(plan, "noise", values({{"level_ratio", 0.9}, {"length_samples", length}}),
                        {band_rule(plan, std::move(bands)), test::implicit_latency()});
}

}  // namespace

TEST_CASE("response plot: gain and phase of a right board lie on the design, within their mask", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, 60000, {{5.0, 30.0, -5.0, 0.1}});
    const CaseJudgement judgement = judge(plan, the_case, test::right_response(plan, the_case));
    const Plot& plot = gain_plot(judgement);
    REQUIRE(plot.panels.size() == 2);
    CHECK(plot.x.size() > 300);
    CHECK(plot.x.size() <= 128 + 4 * 140);
    CHECK(plot.x.front() == 0.0);
    CHECK(plot.x.back() <= plan.signal.rate_hz / 2.0);
    const PlotCurve& gain = curve(plot.panels[0], PlotCurve::Role::response);
    const PlotCurve& design = curve(plot.panels[0], PlotCurve::Role::reference);
    std::size_t inside = 0, compared = 0;
    for (std::size_t i = 0; i < plot.x.size(); ++i) {
        if (!(design.values[i] > -30.0)) continue;
        ++compared;
        CHECK(std::fabs(gain.values[i] - design.values[i]) < 0.05);
        CHECK(gain.low[i] <= gain.values[i]);
        CHECK(gain.high[i] >= gain.values[i]);
        if (gain.low[i] <= design.values[i] && design.values[i] <= gain.high[i]) ++inside;
    }
    CHECK(compared > 200);
    // 95 % of them, less those that were kept because they are furthest from the design: of each bucket of about 14
    // the extremes of what differs, so up to two of 4 are the most extreme of 14. No share to assert but most.
    CHECK(2 * inside > compared);
    REQUIRE(plot.panels[0].limits.size() == 1);
    CHECK(plot.panels[0].limits[0].from == 5.0);
    CHECK(*plot.panels[0].limits[0].max == 0.1);
    CHECK(plot.panels[0].limits[0].verdict == Verdict::pass);
    CHECK(plot.marks.empty());
    CHECK(plot.panels[1].is_angle);
}

TEST_CASE("response plot: where it fails there is a mark, and the curve shows it", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Case the_case = noise_case(plan, 60000, {{5.0, 30.0, -0.5, 0.1}});
    const CaseJudgement judgement = judge(plan, the_case, test::right_response(plan, the_case));
    REQUIRE(verdict_of(judgement.rules) == CaseVerdict::fail);
    const Plot& plot = gain_plot(judgement);
    REQUIRE(plot.marks.size() == 1);
    CHECK(plot.marks[0].verdict == Verdict::fail);
    const auto at = std::find(plot.x.begin(), plot.x.end(), plot.marks[0].x);
    REQUIRE(at != plot.x.end());
    const double gain =
        curve(plot.panels[0], PlotCurve::Role::response).values[static_cast<std::size_t>(at - plot.x.begin())];
    CHECK(judged(gain) == *judgement.rules[0].figures[0].value);
}

TEST_CASE("response plot: tones have a point each", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const std::vector<double> tones{30.0, 60.0, 90.0};
    const Case the_case = test::a_case(
        plan, "multitone",
        values({{"level_ratio", 0.9}, {"frequencies_hz", tones}, {"length_samples", std::int64_t{12000}}}),
        {band_rule(plan, {{20.0, 100.0, -20.0, 1.0}}), test::implicit_latency()});
    const CaseJudgement judgement = judge(plan, the_case, test::right_response(plan, the_case));
    const Plot& plot = gain_plot(judgement);
    REQUIRE(plot.x.size() == 3);
    for (std::size_t i = 0; i < 3; ++i) CHECK(plot.x[i] == Approx(tones[i]));
}

TEST_CASE("response plot: a response that is no number has no gain to show", "[judge]") {
    Plan plan = test::moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Case the_case = noise_case(plan, 20000, {{5.0, 30.0, -5.0, 0.1}});
    auto response = test::right_response(plan, the_case);
    response[500] = 0x7fc00000;
    const CaseJudgement judgement = judge(plan, the_case, response);
    CHECK(verdict_of(judgement.rules) == CaseVerdict::undecided);
    const Plot& plot = gain_plot(judgement);
    for (const double gain : curve(plot.panels[0], PlotCurve::Role::response).values) CHECK(std::isnan(gain));
    for (const double gain : curve(plot.panels[0], PlotCurve::Role::reference).values) CHECK_FALSE(std::isnan(gain));
}
