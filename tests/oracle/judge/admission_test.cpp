#include "oracle/judge/admission.hpp"

#include <catch2/catch.hpp>

#include "oracle/judge/response_judge.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {
using Rows = std::vector<std::vector<double>>;

std::vector<Refusal> refused(const Plan& plan, const std::string& shape, const ParameterValues& given,
                             const Rule& rule) {
    return refusals(plan, test::a_case(plan, shape, given, {rule}));
}
}  // namespace

TEST_CASE("admission: a latency rule that a small step cannot answer names noise that would do", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Rule latency = test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}}));
    // 16 codes over 16 points rise by 1 LSB a sample: lag 1 leaves 16 LSB^2, below 130.
    const auto step = values(
        {{"level_codes", std::int64_t{16}}, {"at_samples", std::int64_t{100}}, {"length_samples", std::int64_t{400}}});
    const auto found = refused(plan, "step", step, latency);
    REQUIRE(found.size() == 1);
    CHECK(found[0].position.line == 20);
    CHECK(
        found[0].problem ==
        "case \"a case\" cannot tell its latency: a lag of 1 would leave a squared residual of 16 sigma^2, below 130");
    CHECK(found[0].remedy ==
          "give it noise (shape = \"noise\", level_ratio = 0.5, length_samples = 4096), or write the rule in another "
          "case");
    CHECK(refused(plan, "noise", values({{"level_ratio", 0.5}, {"length_samples", std::int64_t{4096}}}), latency)
              .empty());
}

TEST_CASE("admission: a stimulus that is silent for hours does not hold up its plan", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Rule latency = test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}}));
    const auto late = values({{"level_ratio", 1.0},
                              {"at_samples", std::int64_t{9'999'999'000}},
                              {"length_samples", std::int64_t{10'000'000'000}}});
    const auto found =
        refused(plan, "step", late, latency);  // a pass over all of it would take the better part of an hour
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem.ends_with("below 130, in its first 4194304 samples"));
}

TEST_CASE("admission: a sine added to noise leaves no part of a band unjudged", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const auto sine = std::make_shared<const std::vector<StimulusWords>>(
        std::vector<StimulusWords>{{"sine", values({{"frequency_hz", 15.0}, {"level_ratio", 0.3}})}});
    const ResponseBand band{10.0, 20.0, -1.0, 0.0};
    for (const std::string shape : {"noise", "chirp"}) {
        auto given = values({{"length_samples", std::int64_t{20000}}});
        if (shape == "chirp")
            given = values({{"from_hz", 5.0}, {"to_hz", 600.0}, {"length_samples", std::int64_t{20000}}});
        const auto alone = answerable_hz(band, plan, test::a_case(plan, shape, given, {}));
        given.set("add", sine);
        INFO(shape);
        CHECK(alone.size() > 10);
        CHECK(answerable_hz(band, plan, test::a_case(plan, shape, given, {})) == alone);
    }
}

TEST_CASE("admission: an implicit latency rule is never refused", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const auto step = values({{"level_codes", std::int64_t{1}}, {"length_samples", std::int64_t{100}}});
    CHECK(refused(plan, "step", step, test::implicit_latency()).empty());
}

TEST_CASE("admission: a response rule needs power and bins in each band", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const auto rule = [&](double from_hz, double to_hz) {
        return test::rule(plan, "response", values({{"bands", Rows{{from_hz, to_hz, -1.0, 1.0}}}}));
    };
    const auto chirp = values({{"from_hz", 50.0}, {"to_hz", 300.0}, {"length_samples", std::int64_t{8192}}});
    CHECK(refused(plan, "chirp", chirp, rule(60.0, 100.0)).empty());
    const auto outside = refused(plan, "chirp", chirp, rule(400.0, 500.0));
    REQUIRE(outside.size() == 1);
    CHECK(outside[0].problem == "the stimulus of case \"a case\" says nothing about the band 400 to 500 Hz");
    CHECK(outside[0].remedy.rfind("use noise or a chirp over that band", 0) == 0);

    const auto tones = values({{"frequencies_hz", std::vector<double>{50.0, 150.0}},
                               {"length_samples", std::int64_t{2000}},
                               {"realisations", std::int64_t{4}}});
    CHECK(refused(plan, "multitone", tones, rule(149.0, 151.0)).empty());
    CHECK(refused(plan, "multitone", tones, rule(60.0, 140.0))[0].remedy ==
          "use noise or a chirp over that band, or a multitone with a tone in it");
    const auto crowded =
        values({{"frequencies_hz", std::vector<double>{50.0, 50.5}}, {"length_samples", std::int64_t{2000}}});
    CHECK(refused(plan, "multitone", crowded, rule(49.0, 51.0))[0].problem ==
          "case \"a case\" is too short to keep its tones apart: 2000 samples in a realisation");

    auto unsure = tones;
    unsure.set("realisations", std::int64_t{3});
    CHECK(
        refused(plan, "multitone", unsure, rule(149.0, 151.0))[0].problem ==
        "case \"a case\" asks for the response of tones in 3 realisations, and nothing says how sure their gains are: "
        "rounding repeats with the period");
    unsure.set("realisations", std::int64_t{1});
    CHECK(refused(plan, "multitone", unsure, rule(149.0, 151.0))[0].remedy ==
          "give the stimulus realisations = 16, each with phases of its own");

    const auto step = values({{"length_samples", std::int64_t{1000}}});
    CHECK(refused(plan, "step", step, rule(10.0, 20.0))[0].problem ==
          "case \"a case\" cannot answer a response rule with shape = \"step\"");
    const auto brief = values({{"length_samples", std::int64_t{63}}});
    CHECK(refused(plan, "noise", brief, rule(10.0, 400.0))[0].problem ==
          "case \"a case\" is too short for a response: 63 samples");
}

TEST_CASE("admission: a latency beyond the window of a short case is refused with the length that would do",
          "[judge]") {
    const Plan plan = test::moving_average_plan();
    const auto latency = [&](std::int64_t samples) {
        return test::rule(plan, "latency", values({{"latency_samples", samples}}));
    };
    const auto noise = [](std::int64_t length) { return values({{"level_ratio", 0.9}, {"length_samples", length}}); };
    CHECK(refused(plan, "noise", noise(81), latency(40)).empty());
    CHECK(refused(plan, "noise", noise(81), latency(-40)).empty());
    const auto found = refused(plan, "noise", noise(80), latency(40));
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "case \"a case\" is too short for a latency of 40 samples: lags of -39 to 39 can be told from 80 samples");
    CHECK(found[0].remedy == "give it at least 81 samples");

    Case running = test::a_case(plan, "noise", noise(180), {latency(40)});
    running.start = Start::running;
    running.start_samples = 100;
    CHECK(refusals(plan, running)[0].remedy == "give it at least 181 samples");
}

TEST_CASE("admission: a written latency is asked of every driven channel, and the blind one is named", "[judge]") {
    Plan plan = test::moving_average_plan(1);
    plan.signal.channels = 3;
    FilterStage slow;
    slow.design = MovingAverage{16};
    slow.channels = {3};
    plan.filter.push_back(slow);
    // 16 codes at once on channels 1 and 2, spread over 16 samples on channel 3.
    const auto step = values(
        {{"level_codes", std::int64_t{16}}, {"at_samples", std::int64_t{100}}, {"length_samples", std::int64_t{400}}});
    Case the_case =
        test::a_case(plan, "step", step, {test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}}))});
    const auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "case \"a case\" cannot tell its latency on channel 3: a lag of 1 would leave a squared residual of 16 "
          "sigma^2, below 130");
    for (const int driven : {1, 2}) {
        the_case.channel = driven;
        CHECK(refusals(plan, the_case).empty());
    }
    the_case.channel = 3;
    CHECK(refusals(plan, the_case).size() == 1);
}

TEST_CASE("admission: a discard leaves less to answer from, and never nothing", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Rule band = test::rule(plan, "response", values({{"bands", Rows{{10.0, 400.0, -90.0, 1.0}}}}));
    const auto running = [&](const std::string& shape, const ParameterValues& given, std::int64_t discard, Rule rule) {
        Case made = test::a_case(plan, shape, given, {std::move(rule)});
        made.start = Start::running;
        made.start_samples = discard;
        return refusals(plan, made);
    };
    const auto noise = values({{"length_samples", std::int64_t{164}}});
    CHECK(running("noise", noise, 100, band).empty());
    CHECK(running("noise", noise, 101, band)[0].problem == "case \"a case\" is too short for a response: 63 samples");
    const auto tones = values({{"frequencies_hz", std::vector<double>{50.0, 52.4}},
                               {"length_samples", std::int64_t{10000}},
                               {"realisations", std::int64_t{5}}});
    // 2.4 Hz x 2000 / 1200 Hz = 4 cycles; of the five realisations the first is cut, then the second too.
    CHECK(running("multitone", tones, 2000, band).empty());
    CHECK(
        running("multitone", tones, 2001, band)[0].problem ==
        "case \"a case\" asks for the response of tones in 3 realisations, and nothing says how sure their gains are: "
        "rounding repeats with the period");

    CHECK(running("noise", noise, 163, test::implicit_latency()).empty());
    for (const std::int64_t all : {std::int64_t{164}, std::int64_t{165}}) {
        const auto found = running("noise", noise, all, band);
        REQUIRE(found.size() == 1);
        CHECK(found[0].position.line == 10);
        CHECK(found[0].problem ==
              "case \"a case\" discards its first " + std::to_string(all) + " samples and has only 164");
        CHECK(found[0].remedy == "discard fewer than 164, or lengthen the stimulus");
    }
    // The noise that would do is longer by the discard.
    const auto step = values({{"level_codes", std::int64_t{16}}, {"length_samples", std::int64_t{400}}});
    CHECK(running("step", step, 300, test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}})))[0]
              .remedy ==
          "give it noise (shape = \"noise\", level_ratio = 0.5, length_samples = 4396), or write the rule in another "
          "case");
}

TEST_CASE("admission: an accepted run is no reference for a case that starts running", "[judge]") {
    const Plan plan = test::moving_average_plan();
    UnchangedRule unchanged;
    unchanged.missing = "no baseline yet";
    Case the_case = test::a_case(plan, "noise", values({{"length_samples", std::int64_t{500}}}),
                                 {{unchanged, {"plan.toml", 30, 3}}});
    for (const Start start : {Start::reset, Start::flush}) {
        the_case.start = start;
        the_case.start_samples = start == Start::flush ? 1000 : 0;  // zeros before the stimulus, longer than it
        CHECK(refusals(plan, the_case).empty());
    }
    the_case.start = Start::running;
    the_case.start_samples = 100;
    const auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].position.line == 30);
    CHECK(found[0].problem ==
          "case \"a case\" starts running, so its first samples hang on what ran before it and cannot equal those of "
          "an accepted run");
    CHECK(found[0].remedy == "start it with \"reset\" or \"flush\", or write the rule in another case");
}

TEST_CASE("admission: bands and bins are in hertz of the case's own rate", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const auto chirp = values({{"from_hz", 50.0}, {"to_hz", 300.0}, {"length_samples", std::int64_t{8192}}});
    Case the_case = test::a_case(plan, "chirp", chirp,
                                 {test::rule(plan, "response", values({{"bands", Rows{{100.0, 140.0, -9.0, 9.0}}}}))});
    CHECK(refusals(plan, the_case).empty());
    the_case.rate_hz = 300.0;  // the same codes are a chirp from 12.5 to 75 Hz
    const auto found = refusals(plan, the_case);
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem == "the stimulus of case \"a case\" says nothing about the band 100 to 140 Hz");
    // 8192 samples are cut into segments of 1024: 300 / 1024 Hz.
    CHECK(found[0].remedy ==
          "use noise or a chirp over that band; its bins are 0.293 Hz apart, a longer record brings them closer");
}

TEST_CASE("admission: of an unknown filter no reference is asked", "[judge]") {
    Plan plan = test::moving_average_plan();
    const Rule latency = test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}}));
    const Rule band = test::rule(plan, "response", values({{"bands", Rows{{10.0, 20.0, -1.0, 1.0}}}}));
    const Case the_case =
        test::a_case(plan, "step", values({{"level_codes", std::int64_t{1}}, {"length_samples", std::int64_t{50}}}),
                     {latency, band});
    CHECK(refusals(plan, the_case).size() == 2);
    plan.filter_is_unknown = true;
    CHECK(refusals(plan, the_case).empty());
}

TEST_CASE("admission: a median has no response, but an error and a latency", "[judge]") {
    Plan plan = test::moving_average_plan();
    const auto noise = values({{"level_ratio", 0.5}, {"length_samples", std::int64_t{8192}}});
    const Rule response = test::rule(plan, "response", values({{"bands", Rows{{50.0, 100.0, -1.0, 1.0}}}}));
    const Rule latency = test::rule(plan, "latency", values({{"latency_samples", std::int64_t{0}}}));
    const Rule error = test::rule(plan, "error", values({{"max_lsb", 1.0}}));
    CHECK(refused(plan, "noise", noise, response).empty());
    FilterStage median;
    median.design = Median{5};
    plan.filter.push_back(median);
    const auto found = refused(plan, "noise", noise, response);
    REQUIRE(found.size() == 1);
    CHECK(found[0].position.line == 20);
    CHECK(found[0].problem ==
          "case \"a case\" asks for the response of a filter with a median in it, which is not linear and has none");
    CHECK(found[0].remedy == "leave the rule out; rules about error, latency and unchanged hold");
    CHECK(refused(plan, "noise", noise, latency).empty());
    CHECK(refused(plan, "noise", noise, error).empty());
    // A channel that does not pass the median has a response; a case that drives the other one has none.
    plan.signal.channels = 2;
    plan.filter.back().channels = {2};
    Case one = test::a_case(plan, "noise", noise, {response});
    one.channel = 1;
    CHECK(refusals(plan, one).empty());
    one.channel = 2;
    CHECK(refusals(plan, one).size() == 1);
}
