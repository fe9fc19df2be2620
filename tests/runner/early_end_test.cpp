// A case ends once its rules are decided, and its capture is judged again to the same verdict.
#include "runner/world/stimulus_sha256.hpp"
#include "tests/runner/run_bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

constexpr std::int64_t budget = 400'000;

/// Noise under a response rule and no other than the implicit latency.
Case& add_response_case(RunBench& bench, double max_db) {
    Case& made = bench.add_noise("noise", 0.9, budget);
    ResponseRule response;
    response.bands = {{100.0, 500.0, {}, max_db}};
    made.rules = {{response, {}}, implicit_latency()};
    return made;
}

const RuleVerdict& response_of(const CaseResult& result) { return result.rules.at(0); }

}  // namespace

TEST_CASE("early end: enough is enough, passed or failed", "[run]") {
    RunBench bench;
    const bool passes = GENERATE(true, false);
    // A mean of 16 has -13.15 dB at its first side lobe.
    const Case& the_case = add_response_case(bench, passes ? -12.0 : -14.0);
    REQUIRE(bench.go());
    const CaseResult& result = bench.run.cases.at(0);
    CHECK(result.verdict == (passes ? CaseVerdict::pass : CaseVerdict::fail));
    CHECK(result.stimulus.samples < budget / 2);
    CHECK(result.stream.samples_sent == result.stimulus.samples);
    CHECK(result.stimulus.sha256 == stimulus_sha256(bench.plan(), the_case, result.stimulus.samples));
    CHECK(static_cast<std::int64_t>(bench.captured(0).size()) == result.stimulus.samples);
    REQUIRE(response_of(result).evidence);
    CHECK(response_of(result).evidence->samples <= result.stimulus.samples);
    CHECK(response_of(result).evidence->budget_samples == budget);
    CHECK(response_of(result).evidence->fixed_length_samples > 0.0);
}

TEST_CASE("early end: a rule that looks at every sample holds the case to its end", "[run]") {
    RunBench bench;
    Case& the_case = add_response_case(bench, -12.0);
    SECTION("an error rule") { the_case.rules.push_back(rule(bench.plan(), "error", values({{"max_lsb", 0.5}}))); }
    SECTION("or the plan") { bench.plan().streams_whole = true; }
    REQUIRE(bench.go());
    CHECK(bench.run.cases.at(0).stimulus.samples == budget);
    CHECK(bench.run.cases.at(0).verdict == CaseVerdict::pass);
}

TEST_CASE("early end: a case after it begins as after any other", "[run]") {
    RunBench bench;
    add_response_case(bench, -12.0);
    Case& next = bench.add_noise("flushed", 0.5, 300);
    next.start = Start::flush;
    next.start_samples = 16;
    REQUIRE(bench.go());
    CHECK(bench.run.cases.at(0).stimulus.samples < budget / 2);
    CHECK(bench.run.cases.at(1).verdict == CaseVerdict::pass);
}
