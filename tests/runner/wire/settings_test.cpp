// Settings of the board, and a case that goes on in the stream of the one before.
#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

/// A board whose filter averages over as many samples as its setting says.
struct AveragingBench : Bench {
    explicit AveragingBench(std::int32_t points = 16) {
        board.filters = {{"average", ModelBoard::Work::average}};
        board.settings = {{"average-points", 1, 64, points}};
    }
};

/// Sends the codes, which must fit the credit, and gives what comes back.
std::vector<Code> returned(Bench& bench, const std::vector<Code>& codes) {
    Wire& wire = bench.session();
    wire.send(codes);
    std::vector<Code> came;
    while (came.size() < codes.size()) {
        const Outcome<Received> received = wire.advance(bench.clock.now() + seconds(1.0));
        REQUIRE(received);
        came.insert(came.end(), received->samples.begin(), received->samples.end());
    }
    return came;
}

}  // namespace

TEST_CASE("settings: one takes effect exactly before the next sample", "[wire]") {
    AveragingBench bench(1);
    bench.board.settings.push_back({"gain", 0, 1, 0});
    REQUIRE(bench.open(0));
    Wire& wire = bench.session();
    // In one go, while the block before is still in flight.
    wire.send(std::vector<Code>{100, 200});
    wire.send_setting(0, 2);
    wire.send(std::vector<Code>{400, 800});
    std::vector<Code> came;
    while (came.size() < 4) {
        const Outcome<Received> received = wire.advance(bench.clock.now() + seconds(1.0));
        REQUIRE(received);
        came.insert(came.end(), received->samples.begin(), received->samples.end());
    }
    CHECK(came == std::vector<Code>{100, 200, 300, 600});
    CHECK(bench.board.settings_made == std::vector<std::pair<std::string, std::int32_t>>{{"average-points", 2}});
}

TEST_CASE("settings: a value that the board refuses ends the stream", "[wire]") {
    AveragingBench bench;
    REQUIRE(bench.open(0));
    bench.session().send_setting(0, 65);
    const Outcome<Received> refused = bench.session().advance(bench.clock.now() + seconds(1.0));
    REQUIRE_FALSE(refused);
    CHECK(refused.error().kind == ErrorKind::bench);
    CHECK(refused.error().problem == "the board answered SET with REFUSED: value or length out of range (sample 0)");
    CHECK_FALSE(bench.session().is_streaming(0));
}

TEST_CASE("settings: one that is none of the board, or without credit, is a defect of the caller", "[wire]") {
    AveragingBench bench;
    bench.board.credit_blocks = 1;
    REQUIRE(bench.open(0));
    SECTION("not there") { bench.session().send_setting(1, 1); }
    SECTION("no credit") {
        bench.session().send(std::vector<Code>{1});
        bench.session().send_setting(0, 1);
    }
    Outcome<Received> refused = bench.session().advance(bench.clock.now());
    if (refused) refused = bench.session().advance(bench.clock.now());
    REQUIRE_FALSE(refused);
    CHECK(refused.error().kind == ErrorKind::defect);
    CHECK(refused.error().problem == "a setting was sent without credit, or is none of the board");
}

TEST_CASE("settings: they survive a START and are lost with the power", "[wire]") {
    AveragingBench bench(1);
    REQUIRE(bench.open(0));
    bench.session().send_setting(0, 4);
    REQUIRE(bench.session().settle());
    REQUIRE(bench.session().start(0));
    CHECK(returned(bench, {400, 0, 0}) == std::vector<Code>{100, 100, 100});
    bench.board.restart();
    bench.wire.reset();
    REQUIRE(bench.open(0));
    CHECK(returned(bench, {400, 0, 0}) == std::vector<Code>{400, 0, 0});
}

TEST_CASE("settle: waits for what is in flight and begins figures and counters anew", "[wire]") {
    AveragingBench bench;
    REQUIRE(bench.open(0));
    Wire& wire = bench.session();
    wire.send(std::vector<Code>(10, 1600));
    wire.send_setting(0, 16);
    REQUIRE(wire.settle());
    CHECK(bench.board.settings_made.size() == 1);
    CHECK(wire.figures().bytes_sent == 0);
    CHECK(wire.figures().bytes_received == 0);
    CHECK(wire.figures().streaming == Duration::zero());
    // What came while it waited is not lost.
    const Outcome<Received> late = wire.advance(bench.clock.now());
    REQUIRE(late);
    CHECK(late->first_index == 0);
    CHECK(late->samples.size() == 10);

    // The filter kept its state, and only what follows counts.
    CHECK(returned(bench, {1600, 1600}) == std::vector<Code>{1100, 1200});
    CHECK(wire.figures().bytes_sent == wire.bytes_to_board(2));
    CHECK(wire.figures().bytes_received == wire.bytes_to_host(2));
    const Outcome<BoardCounters> counters = wire.counters();
    REQUIRE(counters);
    CHECK(counters->blocks == 1);
}

TEST_CASE("settle: needs an open stream, and tells of a silent board", "[wire]") {
    AveragingBench bench;
    SECTION("no stream") {
        REQUIRE(bench.session().greet());
        const Outcome<void> settled = bench.session().settle();
        REQUIRE_FALSE(settled);
        CHECK(settled.error().kind == ErrorKind::defect);
        CHECK(settled.error().problem == "a stream was settled that is not open");
    }
    SECTION("silence") {
        REQUIRE(bench.open(0));
        bench.link.to_host.set_fault({LineFault::lose, true, bench.link.to_host.transfers() + 1});
        bench.session().send_setting(0, 2);
        const Outcome<void> settled = bench.session().settle();
        REQUIRE_FALSE(settled);
        CHECK(settled.error().kind == ErrorKind::bench);
        CHECK_THAT(settled.error().problem, Catch::StartsWith("awaited the answer to SET before sample 0 for 2.0 s"));
        CHECK_FALSE(bench.session().is_streaming(0));
    }
}

TEST_CASE("settings: each passes exactly once, whatever the line loses", "[wire]") {
    for (const LineFault kind : {LineFault::lose, LineFault::flip}) {
        for (int nth = 1; nth < 12; ++nth) {
            CAPTURE(name_of(kind), nth);
            AveragingBench bench;
            bench.limits.block_samples = 4;
            REQUIRE(bench.open(0));
            bench.link.to_board.set_fault({kind, false, bench.link.to_board.transfers() + nth});
            std::vector<Code> came;
            for (const std::int32_t points : {1, 2, 4, 8}) {
                bench.session().send_setting(0, points);
                REQUIRE(bench.session().settle());
                const std::vector<Code> some = returned(bench, {80, 80, 80, 80});
                came.insert(came.end(), some.begin(), some.end());
            }
            CHECK(came == std::vector<Code>{80, 80, 80, 80, 80, 80, 80, 80, 80, 80, 80, 80, 80, 80, 80, 80});
            CHECK(bench.board.settings_made.size() == 4);
            CHECK(bench.board.processed_samples == 16);
        }
    }
}
