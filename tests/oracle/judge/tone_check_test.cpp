// What a tone rule asks of a stimulus: refused on paper, with a stimulus that would do.
#include <catch2/catch.hpp>
#include <chrono>
#include <cmath>

#include "oracle/judge/admission.hpp"
#include "oracle/judge/settling.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

const ParameterValues sinad = values({{"min_sinad_db", 60.0}});

ParameterValues sine(double frequency_hz, std::int64_t length = 4096) {
    return values({{"frequency_hz", frequency_hz}, {"length_samples", length}});
}

std::vector<Refusal> refused(const Plan& plan, const std::string& shape, const ParameterValues& given,
                             const ParameterValues& limits = sinad) {
    return refusals(plan, a_case(plan, shape, given, {rule(plan, "tone", limits)}));
}

Refusal only(const std::vector<Refusal>& found) {
    REQUIRE(found.size() == 1);
    CHECK(found[0].position.line == 20);
    return found[0];
}

Plan plan_of(FilterDesign design) {
    Plan plan = moving_average_plan();
    plan.filter[0].design = std::move(design);
    return plan;
}

const std::string head = "a rule of kind \"tone\" in case \"a case\", ";

}  // namespace

TEST_CASE("tone check: only one steady sine will do", "[judge]") {
    const Plan plan = moving_average_plan();
    CHECK(refused(plan, "sine", sine(30.0)).empty());
    const auto added = [](const std::string& shape, ParameterValues given) {
        auto words = sine(30.0);
        words.set("add", std::make_shared<const std::vector<StimulusWords>>(
                             std::vector<StimulusWords>{{shape, std::move(given)}}));
        return words;
    };
    CHECK(refused(plan, "sine", added("step", {})).empty());
    CHECK(refused(plan, "sine", added("silence", {})).empty());
    auto jumping = sine(30.0);
    jumping.set("realisations", std::int64_t{4});
    const std::string remedy =
        "give it shape = \"sine\" without realisations, a step at most added to it, and a length_samples of 4096 or so";
    for (const auto& [shape, given] : std::vector<std::pair<std::string, ParameterValues>>{
             {"noise", values({{"length_samples", std::int64_t{4096}}})},
             {"step", values({{"length_samples", std::int64_t{4096}}})},
             {"sine", jumping},
             {"sine", added("sine", values({{"frequency_hz", 50.0}}))},
             {"sine", added("sine", values({{"frequency_hz", 30.0}}))},
             {"sine", added("noise", {})},
             {"sine", added("ramp", values({{"from_ratio", 0.0}, {"to_ratio", 0.1}}))},
             {"multitone",
              values({{"frequencies_hz", std::vector<double>{30.0, 50.0}}, {"length_samples", std::int64_t{4096}}})}}) {
        INFO(shape);
        const Refusal found = only(refused(plan, shape, given));
        CHECK(found.problem == head + "whose stimulus does not come to one steady sine");
        CHECK(found.remedy == remedy);
    }
}

TEST_CASE("tone check: settling and record must fit in, and the length that does is named", "[judge]") {
    const Plan plan = moving_average_plan();
    // 15 to settle; a cycle of 30 Hz is 40 samples, so the 80 that ten harmonics take decide.
    CHECK(refused(plan, "sine", sine(30.0, 95)).empty());
    const Refusal found = only(refused(plan, "sine", sine(30.0, 94)));
    CHECK(found.problem ==
          head +
              "whose filter has settled on the sine after 15 returned samples, of 94, and the figures take another 80");
    CHECK(found.remedy == "give it a length_samples of at least 95");
    // A cycle of 1 Hz takes 1200.
    CHECK(only(refused(plan, "sine", sine(1.0, 1000))).remedy == "give it a length_samples of at least 1215");
    CHECK(refused(plan, "sine", sine(1.0, 1215)).empty());
    // Of a recursion: the remedy holds as well.
    const double r = std::exp(-1.0 / 3000.0);
    const Plan slow = plan_of(BiquadCascade{{{1.0 - r, 0.0, 0.0, -r, 0.0}}});
    const std::string remedy = only(refused(slow, "sine", sine(30.0))).remedy;
    const std::string words = "give it a length_samples of at least ";
    REQUIRE(remedy.starts_with(words));
    const std::int64_t length = std::stoll(remedy.substr(words.size()));
    // r^n x 32768 x 16 below 1: n = 3000 ln 524288 = 39509, and 80.
    CHECK(std::abs(static_cast<double>(length) - 39589.0) < 5.0);
    CHECK(refused(slow, "sine", sine(30.0, length)).empty());
    CHECK_FALSE(refused(slow, "sine", sine(30.0, length - 1)).empty());
}

TEST_CASE("tone check: a filter that rings for hours does not hold up its plan", "[judge]") {
    const double r = 1.0 - 1e-9;
    const Plan plan = plan_of(BiquadCascade{{{1.0 - r, 0.0, 0.0, -r, 0.0}}});
    const auto begin = std::chrono::steady_clock::now();
    for (int i = 0; i < 100; ++i) {
        const Refusal found = only(refused(plan, "sine", sine(30.0 + i, 100'000'000)));
        CHECK(found.problem == head + "whose filter takes more than 1048576 samples to settle on a sine");
    }
    // One run of 2^21 samples and 99 looks at what it came to; a run each would be some seconds.
    CHECK(std::chrono::steady_clock::now() - begin < std::chrono::seconds(10));
}

TEST_CASE("tone check: frequencies that cannot be told", "[judge]") {
    const Plan plan = moving_average_plan();
    const auto problem = [&](const Plan& of, const ParameterValues& given, const ParameterValues& limits = sinad) {
        return only(refused(of, "sine", given, limits)).problem.substr(head.size());
    };
    CHECK(problem(plan, sine(599.9999)) ==
          "whose sine of 600 Hz is not told from 0 Hz or half the rate, 600 Hz, in a record of 1048576 samples");
    CHECK(problem(plan, sine(0.001, 100'000'000)).starts_with("whose sine of 0.001 Hz is not told from 0 Hz"));
    CHECK(problem(plan, sine(75.0)) == "whose filter leaves nothing of a sine of 75 Hz");
    CHECK(
        problem(plan_of(FirDecimator{{0.25, 0.25, 0.25, 0.25}, 4}), sine(151.0)) ==
        "whose sine of 151 Hz lies above half the rate of the output, 150 Hz, and comes through at another frequency");
    const auto thd = values({{"max_thd_db", -60.0}});
    CHECK(problem(moving_average_plan(4), sine(400.0), thd) ==
          "whose sine of 400 Hz has no harmonic up to order 10 at a frequency of its own");
    CHECK(refused(moving_average_plan(4), "sine", sine(400.0)).empty());
}

TEST_CASE("tone check: a median is judged too, it only has no gain", "[judge]") {
    CHECK(refused(plan_of(Median{5}), "sine", sine(30.0)).empty());
}

TEST_CASE("settling: counted where it must be, for every start and channel", "[judge]") {
    Plan plan = moving_average_plan();
    Case the_case = a_case(plan, "sine", sine(30.0), {});
    CHECK(settling_samples(plan, the_case, 1) == 15);
    CHECK(first_settled_sample(plan, the_case, 1, 10, 0) == 25);
    const double r = std::exp(-1.0 / 100.0);
    plan.filter[0].design = BiquadCascade{{{1.0 - r, 0.0, 0.0, -r, 0.0}}};
    const auto from_zeros = settling_samples(plan, the_case, 1);
    the_case.start = Start::running;
    the_case.start_samples = 5000;
    const auto from_anywhere = settling_samples(plan, the_case, 1);
    REQUIRE((from_zeros && from_anywhere));
    // Twice as far off: 100 ln 2 more.
    CHECK(std::abs(*from_anywhere - *from_zeros - 69) <= 1);
    CHECK(first_settled_sample(plan, the_case, 1, 0, 2) == 5002);
}
