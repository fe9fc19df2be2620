// Whole runs on a board whose filter changes the sample rate.
#include <catch2/catch.hpp>

#include "runner/judge_run.hpp"
#include "tests/runner/run_bench.hpp"

namespace halflsb {
namespace {

using namespace halflsb::test;

FilterStage stage_of(FilterDesign design) {
    FilterStage stage;
    stage.design = std::move(design);
    return stage;
}

/// The board averages 16 samples and returns each fourth average.
struct FourthAverage : RunBench {
    explicit FourthAverage(int phase) {
        model.filters[0].down = 4;
        model.filters[0].phase = phase;
        FirDecimator decimator{std::vector<double>(16, 1.0 / 16.0), 4};
        decimator.phase_samples = phase;
        plan().filter = {stage_of(decimator)};
    }
};

}  // namespace

TEST_CASE("run rates: a decimator passes, from a reset, a flush and running, with every phase", "[run]") {
    for (const int phase : {0, 1, 3}) {
        CAPTURE(phase);
        FourthAverage bench(phase);
        bench.add_noise("loud", 0.9);
        Case& quiet = bench.add_noise("quiet", 0.01, 300);
        quiet.start = Start::flush;
        quiet.start_samples = 16;
        Case& next = bench.add_noise("next", 0.5, 400);
        next.start = Start::running;
        next.start_samples = 16;
        bench.request.rig.block_samples = 7;  // no multiple of the factor
        REQUIRE(bench.go());
        REQUIRE(bench.run.cases.size() == 3);
        for (const CaseResult& result : bench.run.cases) CHECK(result.verdict == CaseVerdict::pass);
        CHECK(bench.model.starts == 1);
        CHECK(bench.captured(0).size() == 250);
        CHECK(bench.captured(1).size() == 75);
        CHECK(bench.captured(2).size() == 100);
        const StreamFacts& flushed = bench.run.cases[1].stream;
        CHECK(flushed.samples_sent == 316);
        CHECK(flushed.samples_received == 79);
        CHECK(flushed.ticks_total == 300 * 100);
        // Progress counts what is sent.
        CHECK(bench.observer.steps.back() == std::pair<std::int64_t, std::int64_t>{400, 400});
    }
}

TEST_CASE("run rates: another phase than the plan says is told by the stream, not by the samples", "[run]") {
    FourthAverage bench(0);
    bench.model.filters[0].phase = 3;
    bench.add_noise("noise");
    bench.request.rig.block_samples = 7;
    CHECK(bench.go());
    REQUIRE(bench.run.cases.size() == 1);
    CHECK(bench.run.cases[0].verdict == CaseVerdict::invalid);
    REQUIRE(bench.run.cases[0].invalid);
    CHECK(bench.run.cases[0].invalid->problem ==
          "the board answered block 0 (samples 0 to 6) with 1 sample; the plan's filter returns 2 for them");
}

TEST_CASE("run rates: an interpolator returns more than it gets, a pair of channels too", "[run]") {
    RunBench bench;
    bench.model.filters[0] = {"average", ModelBoard::Work::pass};
    bench.model.filters[0].up = 3;
    bench.model.filters[0].channels_in = bench.model.filters[0].channels_out = 2;
    bench.plan().signal.channels = 2;
    bench.plan().filter = {stage_of(FirInterpolator{{1.0, 0.0, 0.0}, 3})};
    bench.add_noise("both");
    Case& second = bench.add_noise("second alone");
    second.channel = 2;
    REQUIRE(bench.go());
    for (const CaseResult& result : bench.run.cases) CHECK(result.verdict == CaseVerdict::pass);
    CHECK(bench.captured(0).size() == 2 * 3000);
}

}  // namespace halflsb
