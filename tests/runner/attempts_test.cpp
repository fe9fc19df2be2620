// A case whose capture is not whole runs again as often as the rig allows; one that failed never.
#include <filesystem>

#include "runner/world/sha256.hpp"
#include "tests/runner/run_bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

/// Silent from the fourth block of each of the first `broken` streams on.
void break_streams(RunBench& bench, int broken) {
    bench.model.instead = [&bench, broken, begun = std::int64_t{0}, at_begin = std::int64_t{0}](
                              std::uint8_t type, const Bytes&, Bytes&) mutable {
        if (bench.model.starts != begun) {
            begun = bench.model.starts;
            at_begin = bench.model.processed_blocks;
        }
        return type == 0x10 && begun <= broken && bench.model.processed_blocks >= at_begin + 3;
    };
}

}  // namespace

TEST_CASE("attempts: an invalid case runs again until its capture is whole", "[run]") {
    RunBench bench;
    bench.request.rig.attempts = 3;
    bench.add_noise("shaky line");
    bench.add_noise("after it");
    break_streams(bench, 2);
    REQUIRE(bench.go());
    REQUIRE(bench.run.cases.size() == 2);
    const CaseResult& result = bench.run.cases[0];
    CHECK(result.verdict == CaseVerdict::pass);
    CHECK(result.capture_file == "captures/001-shaky-line.npy");
    REQUIRE(result.attempts.size() == 2);
    for (std::size_t k = 0; k < 2; ++k) {
        const AttemptResult& attempt = result.attempts[k];
        CHECK(attempt.invalid.kind == ErrorKind::bench);
        CHECK_THAT(attempt.invalid.problem, Catch::StartsWith("awaited the answer to block 3 (samples 192 to 255)"));
        CHECK(attempt.stream.samples_received == 192);
        CHECK(attempt.stream.samples_sent > 192);
        CHECK(attempt.elapsed_s > 1.0);
        CHECK(attempt.started_utc == bench.clock.utc());
        CHECK(attempt.capture_file == "captures/001-shaky-line.attempt-" + std::to_string(k + 1) + ".npy");
        CHECK(attempt.capture_sha256 == sha256_of_file(bench.run_folder + "/" + attempt.capture_file).value());
        const std::vector<Code> part = bench.codes_of(attempt.capture_file, bench.plan().signal.output);
        const std::vector<Code> whole = bench.captured(0);
        REQUIRE(part.size() == 192);
        CHECK(std::equal(part.begin(), part.end(), whole.begin()));
    }
    CHECK(bench.run.cases[1].attempts.empty());
    REQUIRE(bench.observer.retries.size() == 2);
    CHECK_THAT(bench.observer.retries[0], Catch::StartsWith("shaky line, 1: awaited the answer to block 3"));
    CHECK_THAT(bench.observer.retries[1], Catch::StartsWith("shaky line, 2: "));
    CHECK(bench.observer.finished_cases == std::vector<std::string>{"shaky line", "after it"});
}

TEST_CASE("attempts: when they are used up the last one is the result", "[run]") {
    for (const int allowed : {1, 2}) {
        CAPTURE(allowed);
        RunBench bench;
        bench.request.rig.attempts = allowed;
        bench.add_noise("broken");
        bench.add_noise("after it");
        break_streams(bench, allowed);
        REQUIRE(bench.go());
        const CaseResult& result = bench.run.cases[0];
        CHECK(result.verdict == CaseVerdict::invalid);
        CHECK(result.invalid);
        CHECK(result.stimulus.sha256.empty());
        CHECK(result.capture_file == "captures/001-broken.npy");
        CHECK(static_cast<int>(result.attempts.size()) == allowed - 1);
        CHECK(static_cast<int>(bench.observer.retries.size()) == allowed - 1);
        CHECK(bench.run.cases[1].verdict == CaseVerdict::pass);
    }
}

TEST_CASE("attempts: a failed case never runs again", "[run]") {
    RunBench bench;
    bench.request.rig.attempts = 5;
    bench.model.filters[0].work = ModelBoard::Work::pass;
    bench.add_noise("fails");
    REQUIRE(bench.go());
    CHECK(bench.run.cases[0].verdict == CaseVerdict::fail);
    CHECK(bench.run.cases[0].attempts.empty());
    CHECK(bench.model.starts == 1);
    CHECK(bench.observer.retries.empty());
}

TEST_CASE("attempts: a board that is gone is not asked again and again", "[run]") {
    RunBench bench;
    bench.request.rig.attempts = 3;
    bench.add_noise("unplugged");
    bench.add_noise("never");
    bench.model.instead = [&](std::uint8_t, const Bytes&, Bytes&) { return bench.model.processed_blocks >= 3; };
    const auto ran = bench.go();
    REQUIRE_FALSE(ran);
    CHECK(ran.error().kind == ErrorKind::bench);
    CHECK_THAT(ran.error().problem, Catch::StartsWith("awaited the board's greeting for 5.0 s"));
    REQUIRE(bench.run.cases.size() == 1);
    const CaseResult& result = bench.run.cases[0];
    CHECK(result.verdict == CaseVerdict::invalid);
    CHECK(result.attempts.empty());
    CHECK(result.capture_file == "captures/001-unplugged.npy");
    CHECK(bench.observer.retries.empty());
    CHECK(bench.observer.finished_cases.size() == 1);
}

TEST_CASE("attempts: settings are sent anew to a board that may have been restarted", "[run]") {
    RunBench bench;
    bench.request.rig.attempts = 2;
    bench.model.settings = {{"average-points", 1, 64, 4}};
    bench.add_noise("changes").settings = {{"average-points", 16, {"plan.toml", 30, 1}}};
    Case& next = bench.add_noise("goes on", 0.01);
    next.settings = {{"average-points", 16, {"plan.toml", 40, 1}}};
    bool restarted = false;
    bench.model.instead = [&](std::uint8_t type, const Bytes&, Bytes&) {
        if (type == 0x10 && bench.model.processed_blocks == 3 && !restarted) {
            restarted = true;
            bench.model.restart();
        }
        return false;
    };
    REQUIRE(bench.go());
    const CaseResult& result = bench.run.cases[0];
    CHECK(result.verdict == CaseVerdict::pass);
    REQUIRE(result.attempts.size() == 1);
    CHECK_THAT(result.attempts[0].invalid.problem, Catch::StartsWith("the board was restarted during the stream"));
    CHECK(bench.model.settings[0].value == 4);
}

TEST_CASE("attempts: a flush starts over on the new stream", "[run]") {
    RunBench bench;
    bench.request.rig.attempts = 2;
    Case& only = bench.add_noise("flushed");
    only.start = Start::flush;
    only.start_samples = 500;
    // Silent in the fourth block: among the zeros. Nothing of the stimulus was sent, so nothing is kept.
    break_streams(bench, 1);
    REQUIRE(bench.go());
    const CaseResult& result = bench.run.cases[0];
    CHECK(result.verdict == CaseVerdict::pass);
    REQUIRE(result.attempts.size() == 1);
    CHECK(result.attempts[0].capture_file.empty());
    CHECK(result.attempts[0].stream.samples_received == 192);
    CHECK(result.attempts[0].stream.ticks_total == 0);
    CHECK(result.stream.samples_received == 1500);
}

TEST_CASE("attempts: an interruption leaves the case unrecorded", "[run]") {
    RunBench bench;
    bench.request.rig.attempts = 2;
    bench.add_noise("interrupted");
    break_streams(bench, 1);
    const auto breaks = bench.model.instead;
    bench.model.instead = [&, breaks](std::uint8_t type, const Bytes& body, Bytes& out) {
        if (bench.model.starts == 2 && type == 0x10) request_interrupt();
        return breaks(type, body, out);
    };
    const auto ran = bench.go();
    forget_interrupt();
    REQUIRE_FALSE(ran);
    CHECK(ran.error().kind == ErrorKind::interrupted);
    CHECK(bench.run.cases.empty());
}
