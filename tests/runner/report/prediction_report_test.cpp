#include "runner/report/prediction_report.hpp"

#include <catch2/catch.hpp>
#include <limits>

#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;
using Catch::Matchers::Contains;

namespace {

Prediction small_prediction() {
    Prediction prediction;
    prediction.title = "CW-7";
    prediction.plan_file = "cw7.toml";
    prediction.signal.rate_hz = 1200.0;
    prediction.signal.input = prediction.signal.output = sample::q15();
    PredictedFilter filter;
    filter.channels = {1};
    filter.stages = 1;
    filter.l1_norm = 1.0;
    filter.arithmetic = PredictedArithmetic{};
    filter.arithmetic->terms = {{"stage 1, sum", 3, 0.5, -1.0, 0.0, 2.0, 1.5, 1.0, -3.0, 1.0, "a formula (a source)"}};
    filter.arithmetic->error = {-3.0, 1.0, 3.0, -3.0, 1.0, false, "worst case: the stimulus is no white noise"};
    prediction.filters = {filter};
    return prediction;
}

std::string text_of(const Prediction& prediction, int width = 100) {
    return prediction_text(prediction, std::nullopt, {false, width, false});
}

}  // namespace

TEST_CASE("prediction report: points, sums and their formula", "[report]") {
    CHECK_THAT(text_of(small_prediction()),
               Contains("error    response less declared reference, at most, while no rail is reached\n"
                        "  point         step, LSB     error in steps  sum |h|  sum h^2  sum h  at the output, LSB\n"
                        "  stage 1, sum        0.5  3 errors, -1 .. 0        2      1.5      1             -3 .. 1\n"
                        "  at the output: a formula (a source)\n"
                        "  error -3 .. 1, rms 3, bias -3 .. 1 LSB (worst case: the stimulus is no white noise)\n"));
}

TEST_CASE("prediction report: twelve cases have a line, more are counted", "[report]") {
    Prediction prediction = small_prediction();
    auto& cases = prediction.filters.front().arithmetic->cases;
    for (int i = 1; i <= 12; ++i)
        cases.push_back({"case " + std::to_string(i), 10 * i, {-1.0, 1.0, 0.5, 0.0, 0.0, true, "statistics of noise"}});
    CHECK_THAT(text_of(prediction), Contains("case 12") && !Contains("more, with --json"));
    cases.push_back(cases.front());
    cases.push_back(cases.front());
    CHECK_THAT(text_of(prediction), Contains("case 12") && Contains("  and 2 more, with --json\n"));
}

TEST_CASE("prediction report: a rail that can be reached says what happens there", "[report]") {
    Prediction prediction = small_prediction();
    PredictedNode node;
    node.name = "stage 1, state";
    node.bits = 16;
    node.worst = 40000.0;
    node.rail_ratio = 40000.0 / 32768.0;
    node.bits_needed = 17;
    node.integer_bits_needed = 1;
    node.fraction_bits = 15;
    auto& nodes = prediction.filters.front().arithmetic->nodes;
    nodes = {node};
    CHECK_THAT(text_of(prediction), Contains("1.221") && !Contains("reaches its rail"));
    nodes.front().is_reachable = true;
    CHECK_THAT(text_of(prediction),
               Contains("  stage 1, state reaches its rail; no derived limit holds from there on\n"));
    nodes.front().effect = RailEffect::clip;
    CHECK_THAT(text_of(prediction),
               Contains("  stage 1, state reaches its rail and clips there as the reference does\n"));
    nodes.front().effect = RailEffect::exempt;
    CHECK_THAT(text_of(prediction), Contains("derived limits leave out the samples that this touches\n"));
    nodes.front().bits_needed.reset();
    CHECK_THAT(text_of(prediction), Contains("none"));
}

TEST_CASE("prediction report: an estimate is never called a bound, and silence is proven or told", "[report]") {
    Prediction prediction = small_prediction();
    PredictedArithmetic& told = *prediction.filters.front().arithmetic;
    told.silence = PredictedSilence{};
    CHECK_THAT(text_of(prediction), Contains("silence  nothing remains when the input has ended: proven\n"));
    told.silence->lower = -std::numeric_limits<double>::infinity();
    told.silence->upper = 4.5;
    told.silence->highest_code = 4;
    told.silence->searched = PredictedSilence::Searched{-1, 3, 7};
    told.silence->estimates = {{"stage 1, section 1", 1.0, 2, 5}};
    CHECK_THAT(
        text_of(prediction),
        Contains(
            "silence  what remains when the input has ended is proven to lie in -infinite .. 4.5 LSB\n"
            "         every state was tried: codes -1 .. 3, the widest cycle of 7 samples\n"
            "         estimate, no bound (Jackson 1969), stage 1, section 1: an oscillation of 2, a constant of 5\n"
            "         steps of its state\n"));
}

TEST_CASE("prediction report: what rules do not see has its remedy, unless exact is there", "[report]") {
    Prediction prediction = small_prediction();
    PredictedSight sight;
    sight.cases = 2;
    sight.cases_left_out = 3;
    sight.sensitivity.is_cut = true;
    sight.sensitivity.most_samples = 131072;
    sight.sensitivity.changes = {{"floor", ChangeSeen::Answer::seen, "error", "step", 9, 1.0},
                                 {"half-even", ChangeSeen::Answer::unseen, "", "", 12345, 1.0},
                                 {"wraps", ChangeSeen::Answer::same, "", "", 0, 0.0}};
    prediction.sight = sight;
    CHECK_THAT(text_of(prediction), Contains("rules    what they would see of a firmware that decided otherwise\n"
                                             "  change     rules of this plan\n"
                                             "  floor      seen by error in \"step\"\n"
                                             "  half-even  not seen: 12,345 samples differ by up to 1 LSB\n"
                                             "  wraps      makes no difference here\n"
                                             "  what is not seen, a rule kind = \"exact\" sees; add it\n"
                                             "  looked at the first 2 cases only, 3 left out; --case selects others\n"
                                             "  of long cases the first 131,072 samples were looked at\n"));
    prediction.sight->sensitivity.failing_rule = "error";
    prediction.sight->sensitivity.failing_case = "step";
    CHECK_THAT(
        text_of(prediction),
        Contains(
            "  warning: a firmware that computes as promised fails error in \"step\", so what is seen there tells\n"
            "  nothing; write \"derived\" for its limits, or wider ones\n"));
    prediction.sight->has_exact_rule = true;
    CHECK_THAT(text_of(prediction), !Contains("add it"));
    prediction.sight->sensitivity.unknown = "rounding is not said";
    CHECK_THAT(text_of(prediction),
               Contains("rules    what they would see of another arithmetic is not told: rounding is not said\n"));
}

TEST_CASE("prediction report: what the plan leaves open stands in the first lines, with what saying it would do",
          "[report]") {
    Prediction prediction = small_prediction();
    PredictedArithmetic& told = *prediction.filters.front().arithmetic;
    told.assumed = {{1, {"each rounding anywhere from floor to half-up", "an accumulator as wide as it takes"}}};
    told.largest_if_rounding_said = 0.5;
    CHECK_THAT(
        text_of(prediction),
        Contains("assumed  stage 1, where the plan says nothing: each rounding anywhere from floor to half-up, an\n"
                 "         accumulator as wide as it takes\n"
                 "         rounding = \"half-up\" in the plan would make the largest error 0.5 LSB in place of 3\n"
                 "filter "));
}

TEST_CASE("prediction report: a treacherous recursion gets a warning with the remedy, and names are escaped",
          "[report]") {
    Prediction prediction = small_prediction();
    prediction.filters.front().warnings = {{2, 10, 44.123}};
    prediction.filters.front().missing = "a median does not scale and add: it has no gain";
    prediction.cases = {{"bad\x1b name", 10, true, std::nullopt}};
    const std::string text = text_of(prediction);
    CHECK_THAT(text, Contains("warning: stage 2, a b/a form of order 10, may lose 44.12 LSB of the output"));
    CHECK_THAT(text, Contains("write it as sections"));
    CHECK_THAT(text, Contains("         a median does not scale and add: it has no gain\n"));
    CHECK(text.find('\x1b') == std::string::npos);
}
