// A stream on a line that loses nothing: order, figures, line use, credit, wrap.
#include <malloc.h>

#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

TEST_CASE("stream: every sample comes back once and in order", "[wire]") {
    for (const int block : {1, 7, 64, 256}) {
        for (const int credit : {1, 2, 64}) {
            CAPTURE(block, credit);
            Bench bench;
            bench.limits.block_samples = block;
            bench.board.credit_blocks = credit;
            REQUIRE(bench.open(1));
            const Streamed streamed = stream(bench.session(), 2001, bench.clock);
            REQUIRE_FALSE(streamed.error);
            CHECK(streamed.samples == summed(2001));
            CHECK(streamed.is_in_order);
            CHECK(streamed.ticks_total == 2001 * 100);
            CHECK(streamed.ticks_largest == 107);
            CHECK(bench.board.processed_samples == 2001);
            CHECK(bench.session().figures().resends == 0);
            CHECK(bench.session().figures().frames_bad == 0);
        }
    }
}

TEST_CASE("stream: the line may cut writes and reads anywhere", "[wire]") {
    Bench bench;
    bench.link.largest_read = 3;
    bench.link.largest_write = 5;
    REQUIRE(bench.open(1));
    const Streamed streamed = stream(bench.session(), 5000, bench.clock);
    REQUIRE_FALSE(streamed.error);
    CHECK(streamed.samples == summed(5000));
    CHECK(bench.session().figures().resends == 0);
}

TEST_CASE("stream: formats and channels of either side", "[wire]") {
    Bench bench;
    bench.limits.block_samples = 10;
    bench.board.filters[0].input = 4;
    bench.board.filters[0].output = 2;
    bench.board.filters[0].channels_in = 2;
    bench.board.filters[0].channels_out = 3;
    REQUIRE(bench.open(0));
    Wire& wire = bench.session();
    CHECK(wire.room_samples() == 10);
    wire.send(std::vector<Code>{1, -2, 0x7FFFFFFF, INT32_MIN});
    const Outcome<Received> first = wire.advance(bench.clock.now() + seconds(1.0));
    REQUIRE(first);
    // The model's channel c of the output is channel c modulo 2 of the input.
    CHECK(first->samples == std::vector<Code>{1, -2, 1, 0x7FFFFFFF, INT32_MIN, 0x7FFFFFFF});
    CHECK(first->first_index == 0);
    REQUIRE(first->blocks.size() == 1);
    CHECK(first->blocks[0].samples == 2);
    CHECK(first->blocks[0].ticks_total == 200);
    CHECK(first->blocks[0].ticks_largest == 107);
    CHECK(to_seconds(first->blocks[0].round_trip) >= 0.0);
    wire.send(std::vector<Code>{5, 6});
    const Outcome<Received> second = wire.advance(bench.clock.now() + seconds(1.0));
    REQUIRE(second);
    CHECK(second->first_index == 2);
}

TEST_CASE("stream: a reset takes effect exactly before the next sample", "[wire]") {
    const std::vector<std::int64_t> resets{0, 1, 100, 356, 999};
    Bench bench;
    REQUIRE(bench.open(1));
    const Streamed streamed = stream(bench.session(), 1000, bench.clock, resets);
    REQUIRE_FALSE(streamed.error);
    CHECK(streamed.samples == summed(1000, resets));
    CHECK(bench.board.resets == 5);
}

TEST_CASE("stream: sequence numbers wrap", "[wire][slow]") {
    Bench bench;
    bench.limits.block_samples = 1;
    bench.link.remembers = false;
    bench.board.credit_blocks = 5;
    REQUIRE(bench.open(1));
    const std::int64_t count = 2 * 65536 + 100;
    const Streamed streamed = stream(bench.session(), count, bench.clock);
    REQUIRE_FALSE(streamed.error);
    CHECK(streamed.samples == summed(count));
    CHECK(bench.session().figures().resends == 0);
}

TEST_CASE("stream: a second one starts from reset, also when the first was left in the middle", "[wire]") {
    Bench bench;
    REQUIRE(bench.open(1));
    Wire& wire = bench.session();
    REQUIRE_FALSE(stream(wire, 1000, bench.clock).error);
    for (int k = 0; k < 3; ++k) wire.send(passed(200));
    SECTION("nothing of it was written") {}
    SECTION("its answers lie on the line") {
        bench.link.largest_read = 30;
        REQUIRE(wire.advance(bench.clock.now()));
    }
    SECTION("a frame was cut") {
        bench.link.largest_write = 200;
        REQUIRE(wire.advance(bench.clock.now()));
    }
    bench.link.largest_write = bench.link.largest_read = SIZE_MAX;
    REQUIRE(wire.start(0));
    const Streamed streamed = stream(wire, 700, bench.clock);
    REQUIRE_FALSE(streamed.error);
    CHECK(streamed.samples == passed(700));
    CHECK(streamed.is_in_order);
}

TEST_CASE("stream: the bytes that were announced are the bytes that travel", "[wire]") {
    for (const int block : {1, 16, 64, 100, 119}) {
        for (const std::int64_t count : {1, 16, 1000}) {
            CAPTURE(block, count);
            Bench bench;
            bench.limits.block_samples = block;
            REQUIRE(bench.open(0));
            const Streamed streamed = stream(bench.session(), count, bench.clock);
            REQUIRE_FALSE(streamed.error);
            const WireFigures figures = bench.session().figures();
            CHECK(figures.bytes_sent == bench.session().bytes_to_board(count));
            CHECK(figures.bytes_received == bench.session().bytes_to_host(count));
        }
    }
    SECTION("docs/wire.md 5: 16-bit samples") {
        for (const auto& [block, there, back] : {std::tuple{16, 41, 48}, {64, 137, 144}, {256, 523, 530}}) {
            Bench bench;
            bench.limits.block_samples = block;
            REQUIRE(bench.open(0));
            CHECK(bench.session().bytes_to_board(block) == there);
            CHECK(bench.session().bytes_to_host(block) == back);
        }
    }
    SECTION("large blocks: that many without zeros, never more with them") {
        for (const bool with_zeros : {false, true}) {
            Bench bench;
            REQUIRE(bench.open(0));
            Wire& wire = bench.session();
            std::int64_t sent = 0;
            for (int k = 0; k < 100; ++k, sent += 256) {
                wire.send(std::vector<Code>(256, with_zeros ? k % 2 : 0x1234));
                while (wire.room_samples() == 0) REQUIRE(wire.advance(bench.clock.now() + seconds(1.0)));
            }
            REQUIRE(wire.counters());
            // Sequence number, ticks and CRC bring zeros of their own: each frame may save up to 2 bytes.
            const std::int64_t most = wire.bytes_to_board(sent), least = most - 2 * 100;
            const std::int64_t status = 12;  // 0x00, then a frame of type, nonce and CRC
            CHECK(wire.figures().bytes_sent - status <= most);
            CHECK(wire.figures().bytes_sent - status >= least);
        }
    }
}

TEST_CASE("stream: credit is used up and never exceeded", "[wire]") {
    Bench bench;
    bench.board.credit_blocks = 3;
    bench.limits.block_samples = 8;
    REQUIRE(bench.open(0));
    Wire& wire = bench.session();
    const std::vector<Code> block(8, 1);
    for (int k = 0; k < 3; ++k) {
        CHECK(wire.room_samples() == 8);
        wire.send(block);
    }
    CHECK(wire.room_samples() == 0);
    const Outcome<Received> received = wire.advance(bench.clock.now() + seconds(1.0));
    REQUIRE(received);
    CHECK(wire.room_samples() == 8);

    SECTION("a block without credit or of the wrong size is a defect of the caller") {
        wire.send(std::vector<Code>(9, 1));
        const Outcome<Received> refused = wire.advance(bench.clock.now());
        REQUIRE_FALSE(refused);
        CHECK(refused.error().kind == ErrorKind::defect);
        CHECK(refused.error().problem == "a block of 9 codes was sent where 8 samples of 1 fit");
    }
    SECTION("a board may grant less than it greeted with") {
        bench.board.credit_said_at_start = 1;
        bench.board.block_said_at_start = 5;
        REQUIRE(wire.start(0));
        CHECK(wire.room_samples() == 5);
        wire.send(std::vector<Code>(5, 1));
        CHECK(wire.room_samples() == 0);
    }
}

TEST_CASE("stream: advance returns in time", "[wire]") {
    Bench bench;
    REQUIRE(bench.open(0));
    Wire& wire = bench.session();
    SECTION("at once when nothing is in flight") {
        const Duration before = bench.clock.elapsed();
        const Outcome<Received> received = wire.advance(bench.clock.now() + seconds(60.0));
        REQUIRE(received);
        CHECK(received->samples.empty());
        CHECK(bench.clock.elapsed() - before < seconds(0.001));
    }
    SECTION("at the deadline when nothing comes") {
        bench.link.to_host.set_fault({LineFault::lose, true, bench.link.to_host.transfers() + 1});
        wire.send(std::vector<Code>(4, 1));
        const Instant until = bench.clock.now() + seconds(0.125);
        const Outcome<Received> received = wire.advance(until);
        REQUIRE(received);
        CHECK(received->samples.empty());
        CHECK(bench.clock.now() == until);
    }
    SECTION("with a deadline in the past it still moves what is there") {
        wire.send(std::vector<Code>(4, 1));
        const Outcome<Received> received = wire.advance(bench.clock.now() - seconds(1.0));
        REQUIRE(received);
        CHECK(received->samples.size() == 4);
    }
    SECTION("a caller that was away for long does not blame the board") {
        wire.send(std::vector<Code>(4, 1));
        bench.link.largest_read = 10;
        REQUIRE(wire.advance(bench.clock.now()));
        bench.clock.advance(seconds(30.0));
        for (int k = 0; k < 5; ++k) REQUIRE(wire.advance(bench.clock.now()));
        CHECK(wire.room_samples() > 0);
        CHECK(wire.figures().resends == 0);
    }
}

TEST_CASE("stream: the line never idles for want of work", "[wire][slow]") {
    // 10 bits a byte, 256 samples in 523 bytes there and 530 back: the answers set the pace.
    for (const long baud : {115200L, 921600L, 3000000L}) {
        Bench bench;
        bench.link.set_baud(baud);
        bench.board.credit_blocks = 4;
        REQUIRE(bench.open(0));
        const std::int64_t count = 40'000;
        const Streamed streamed = stream(bench.session(), count, bench.clock, {}, false);
        REQUIRE_FALSE(streamed.error);
        const double rate_hz = static_cast<double>(count) / to_seconds(bench.session().figures().streaming);
        const double line_hz = static_cast<double>(baud) / 10 / 2;
        CAPTURE(baud, rate_hz, rate_hz / line_hz);
        CHECK(rate_hz >= 0.95 * line_hz);
        CHECK(bench.session().figures().resends == 0);
    }
}

TEST_CASE("stream: slow lines are not taken for silent boards", "[wire]") {
    for (const long baud : {1200L, 9600L}) {
        for (const int credit : {1, 64}) {
            CAPTURE(baud, credit);
            Bench bench;
            bench.limits.block_samples = 64;
            bench.limits.greet = seconds(20.0);
            bench.board.credit_blocks = credit;
            bench.link.set_baud(baud);
            REQUIRE(bench.open(1));
            const Streamed streamed = stream(bench.session(), 6'000, bench.clock);
            REQUIRE_FALSE(streamed.error);
            CHECK(streamed.samples == summed(6'000));
            CHECK(bench.session().figures().resends == 0);
        }
    }
}

TEST_CASE("stream: the board's counters are differences since its start", "[wire]") {
    Bench bench;
    bench.board.frames_bad = 4'000'000'000U;
    bench.board.gaps = 17;
    REQUIRE(bench.open(1));
    Wire& wire = bench.session();
    bench.link.to_board.set_fault({LineFault::flip, false, bench.link.to_board.transfers() + 2});
    const Streamed streamed = stream(wire, 3000, bench.clock);
    REQUIRE_FALSE(streamed.error);
    for (int k = 0; k < 3; ++k) wire.send(std::vector<Code>(1, 1));
    const Outcome<BoardCounters> counters = wire.counters();
    REQUIRE(counters);
    CHECK(counters->frames_bad == 1);
    CHECK(counters->gaps == 1);
    CHECK(counters->blocks == 12 + 3);
    // What was in flight when they were asked is not lost.
    const Outcome<Received> rest = wire.advance(bench.clock.now());
    REQUIRE(rest);
    CHECK(rest->first_index == 3000);
    CHECK(rest->samples.size() == 3);
}

TEST_CASE("stream: memory does not grow with its length", "[wire][slow]") {
    Bench bench;
    bench.link.remembers = false;
    bench.limits.block_samples = 64;
    REQUIRE(bench.open(1));
    Wire& wire = bench.session();
    const std::vector<Code> block(64, 3);
    std::int64_t received = 0;
    const auto stream_until = [&](std::int64_t count) {
        while (received < count) {
            while (wire.room_samples() > 0) wire.send(block);
            const Outcome<Received> step = wire.advance(bench.clock.now() + seconds(1.0));
            REQUIRE(step);
            received += static_cast<std::int64_t>(step->samples.size());
        }
        // Bytes that the program holds; a sanitizer's own allocator reports 0.
        return mallinfo2().uordblks;
    };
    const std::size_t early = stream_until(20'000), late = stream_until(1'000'000);
    // A byte kept for each block of 64 would be 15 kB.
    CHECK(late < early + 8'192);
}
