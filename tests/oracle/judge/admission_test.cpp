#include "oracle/judge/admission.hpp"

#include <catch2/catch.hpp>

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

    const auto tones =
        values({{"frequencies_hz", std::vector<double>{50.0, 150.0}}, {"length_samples", std::int64_t{2000}}});
    CHECK(refused(plan, "multitone", tones, rule(149.0, 151.0)).empty());
    CHECK(refused(plan, "multitone", tones, rule(60.0, 140.0))[0].remedy ==
          "use noise or a chirp over that band, or a multitone with a tone in it");
    const auto crowded =
        values({{"frequencies_hz", std::vector<double>{50.0, 50.5}}, {"length_samples", std::int64_t{2000}}});
    CHECK(refused(plan, "multitone", crowded, rule(49.0, 51.0))[0].problem ==
          "case \"a case\" is too short to keep its tones apart: 2000 samples");

    const auto step = values({{"length_samples", std::int64_t{1000}}});
    CHECK(refused(plan, "step", step, rule(10.0, 20.0))[0].problem ==
          "case \"a case\" cannot answer a response rule, which is not for a step");
    const auto brief = values({{"length_samples", std::int64_t{63}}});
    CHECK(refused(plan, "noise", brief, rule(10.0, 400.0))[0].problem ==
          "case \"a case\" is too short for a response: 63 samples");
}
