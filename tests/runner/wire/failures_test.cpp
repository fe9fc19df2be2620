// What a person reads when a board does not do its part: whole texts.
#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

Error greet_with(Peer& peer, long baud = 0) {
    FakeClock clock;
    FakeLink link(clock, peer);
    link.set_baud(baud);
    const std::unique_ptr<Wire> wire = make_framed_wire(link, clock, WireLimits{}, 1);
    const Outcome<Greeting> greeting = wire->greet();
    REQUIRE_FALSE(greeting);
    CHECK(greeting.error().kind == ErrorKind::bench);
    CHECK(clock.elapsed() >= seconds(5.0));
    CHECK(clock.elapsed() < seconds(5.1));
    return greeting.error();
}

/// Opens a stream on "sum" and sends until an Error comes; `hook` replaces answers.
Error stream_with(Bench& bench) {
    if (const Outcome<void> opened = bench.open(1); !opened) return opened.error();
    const Streamed streamed = stream(bench.session(), 5000, bench.clock);
    REQUIRE(streamed.error);
    CHECK(streamed.error->kind == ErrorKind::bench);
    const std::vector<Code> right = summed(5000);
    CHECK(std::equal(streamed.samples.begin(), streamed.samples.end(), right.begin()));
    return *streamed.error;
}

}  // namespace

TEST_CASE("failures: nothing answers HELLO", "[wire]") {
    SilentPeer peer;
    CHECK(to_text(greet_with(peer, 115200)) ==
          "fake line: awaited the board's greeting for 5.0 s; nothing came\n"
          "  is the board powered, is firmware with the kit running on it, and are TX and RX crossed at 115200 baud?");
}

TEST_CASE("failures: an echo instead of a board", "[wire]") {
    EchoPeer peer;
    const Error error = greet_with(peer);
    CHECK(error.problem.rfind("awaited the board's greeting for 5.0 s; ", 0) == 0);
    CHECK(error.problem.find(" bytes came, the same as was sent: it looks like an echo") != std::string::npos);
    CHECK(error.remedy == "are TX and RX joined, or does a terminal server return what it gets?");
}

TEST_CASE("failures: text instead of frames is quoted", "[wire]") {
    TalkingPeer peer("weight 12.5 g\r\n");
    const Error error = greet_with(peer);
    CHECK(error.problem.find("awaited the board's greeting for 5.0 s; ") == 0);
    CHECK(error.problem.find(" bytes came and no whole frame, the last: … \" 12.5 g\\r\\nweight 12.5 g\\r\\n\"") !=
          std::string::npos);
    CHECK(error.remedy == "text comes on this port: is it the right one, and is the firmware built with the kit?");
}

TEST_CASE("failures: bytes instead of frames are shown", "[wire]") {
    TalkingPeer peer("\xF8\x80\xFF");
    const Error error = greet_with(peer, 9600);
    CHECK(error.problem.find(" bytes came and no whole frame, the last: f8 80 ff f8 80 ff") != std::string::npos);
    CHECK(error.remedy == "does the firmware run the line at 9600 baud, 8 data bits, no parity?");
}

TEST_CASE("failures: the board falls silent in the stream", "[wire]") {
    Bench bench;
    bench.board.instead = [&](std::uint8_t type, const Bytes& body, Bytes&) {
        return type == 0x10 && ModelBoard::number(body, 0, 2) >= 2;
    };
    CHECK(to_text(stream_with(bench)) ==
          "fake line: awaited the answer to block 2 (samples 512 to 767) for 2.0 s; nothing came\n"
          "  is the board powered, is firmware with the kit running on it, and are TX and RX crossed?");
    CHECK(bench.session().figures().resends >= 2);
}

TEST_CASE("failures: the board talks but never answers the block", "[wire]") {
    Bench bench;
    bench.board.instead = [&](std::uint8_t type, const Bytes&, Bytes& out) {
        if (type == 0x10) ModelBoard::say(out, 0x92, {0, 0});  // EXPECT 0, again and again
        return type == 0x10;
    };
    const Error error = stream_with(bench);
    CHECK(error.problem.rfind("sent block 0 (samples 0 to 255) 11 times without an answer to it; after the last time ",
                              0) == 0);
    CHECK(error.problem.find("the last EXPECT") != std::string::npos);
    CHECK(error.remedy == "look at the board: is it busy, or does it drop what it receives?");
    CHECK(bench.clock.elapsed() < seconds(30.0));
}

TEST_CASE("failures: the board restarts in the stream", "[wire]") {
    Bench bench;
    bool is_over = false;
    bench.board.instead = [&](std::uint8_t type, const Bytes& body, Bytes&) {
        if (type == 0x10 && ModelBoard::number(body, 0, 2) == 5 && !is_over) {
            is_over = true;
            bench.board.restart();
        }
        return false;
    };
    CHECK(to_text(stream_with(bench)) ==
          "fake line: the board was restarted during the stream: it knows of no stream at sample 1,280\n"
          "  look for a watchdog, a brown-out or a fault handler, and run again");
}

TEST_CASE("failures: a REFUSED names its reason", "[wire]") {
    Bench bench;
    std::uint8_t reason = 5;
    SECTION("of a block") {
        bench.board.instead = [&](std::uint8_t type, const Bytes& body, Bytes& out) {
            if (type != 0x10 || ModelBoard::number(body, 0, 2) != 1) return false;
            ModelBoard::say(out, 0xFF, {0x10, 1, 0, reason});
            return true;
        };
        CHECK(to_text(stream_with(bench)) ==
              "fake line: the board answered SAMPLES with REFUSED: value or length out of range (sample 256)\n"
              "  the frame arrived whole, so the firmware sent it so: see docs/wire.md 3");
    }
    SECTION("of START") {
        bench.board.instead = [&](std::uint8_t type, const Bytes& body, Bytes& out) {
            if (type != 0x02) return false;
            ModelBoard::say(out, 0xFF,
                            {0x02, static_cast<std::uint8_t>(body[0]), static_cast<std::uint8_t>(body[1]), 4});
            return true;
        };
        CHECK(stream_with(bench).problem == "the board answered START with REFUSED: no such filter, setting or table");
    }
    SECTION("of another question or block: late news, not ours") {
        bench.board.instead = [&](std::uint8_t type, const Bytes& body, Bytes& out) {
            if (type == 0x02)
                ModelBoard::say(out, 0xFF, {0x02, static_cast<std::uint8_t>(~static_cast<unsigned>(body[0])), 0, 4});
            if (type == 0x10) ModelBoard::say(out, 0xFF, {0x10, 0x00, 0x80, 5});
            return false;
        };
        REQUIRE(bench.open(1));
        CHECK_FALSE(stream(bench.session(), 5000, bench.clock).error);
    }
}

TEST_CASE("failures: answers that contradict the stream", "[wire]") {
    Bench bench;
    std::string problem;
    const auto answer_block_1 = [&](std::uint8_t type, std::vector<std::uint8_t> answer) {
        bench.board.instead = [type, answer](std::uint8_t asked, const Bytes& body, Bytes& out) {
            if (asked != 0x10 || ModelBoard::number(body, 0, 2) != 1) return false;
            ModelBoard::say(out, type, answer);
            return true;
        };
    };
    SECTION("too few samples") {
        answer_block_1(0x90, {1, 0, 0, 0, 0, 0, 0, 0, 0, 7, 7});
        problem = "the board answered block 1 (samples 256 to 511) with 2 bytes of samples; 512 are right";
    }
    SECTION("no samples, no ticks") {
        answer_block_1(0x90, {1, 0});
        problem = "a RESPONSE of 2 bytes came, which is too short";
    }
    SECTION("DONE for a block") {
        answer_block_1(0x91, {1, 0, 0, 0, 0, 0, 0, 0, 0, 0});
        problem = "the board answered block 1 (samples 256 to 511) with DONE instead of RESPONSE";
    }
    CHECK(stream_with(bench).problem == problem);
}

TEST_CASE("failures: a reset that took effect elsewhere", "[wire]") {
    Bench bench;
    std::string problem;
    std::uint8_t type = 0x91;
    std::vector<std::uint8_t> answer{0, 0, 9, 0, 0, 0, 0, 0, 0, 0};
    SECTION("at another sample") { problem = "asked for RESET before sample 0, the board did it before sample 9"; }
    SECTION("with samples") {
        type = 0x90;
        answer.assign(11, 0);
        problem = "the board answered RESET before sample 0 with RESPONSE instead of DONE";
    }
    bench.board.instead = [&](std::uint8_t asked, const Bytes&, Bytes& out) {
        if (asked == 0x11) ModelBoard::say(out, type, answer);
        return asked == 0x11;
    };
    REQUIRE(bench.open(1));
    bench.session().send_reset();
    const Outcome<Received> received = bench.session().advance(bench.clock.now() + seconds(1.0));
    REQUIRE_FALSE(received);
    CHECK(received.error().problem == problem);
}

TEST_CASE("failures: a start on terms that cannot be", "[wire]") {
    Bench bench;
    std::string problem;
    SECTION("larger blocks than asked for") {
        bench.board.block_said_at_start = 257;
        problem = "asked for blocks of 256 samples, the board granted 257";
    }
    SECTION("empty blocks") {
        bench.board.block_said_at_start = 0;
        problem = "asked for blocks of 256 samples, the board granted 0";
    }
    SECTION("no credit") {
        bench.board.credit_said_at_start = 0;
        problem = "the board granted a credit of 0 blocks; 1 to 64 are possible";
    }
    SECTION("no answer to START") {
        bench.board.instead = [](std::uint8_t type, const Bytes&, Bytes&) { return type == 0x02; };
        problem = "awaited the answer to START for 2.0 s; nothing came";
    }
    SECTION("no counters") {
        bench.board.instead = [](std::uint8_t type, const Bytes&, Bytes&) { return type == 0x03; };
        problem = "awaited the board's counters for 2.0 s; nothing came";
    }
    SECTION("a page is missing") {
        bench.board.instead = [](std::uint8_t type, const Bytes& body, Bytes&) {
            return type == 0x01 && ModelBoard::number(body, 4, 1) == 2;
        };
        problem = "awaited page 2 of 3 of the board's greeting for 5.0 s; nothing came";
    }
    CHECK(stream_with(bench).problem == problem);
}

TEST_CASE("failures: an interrupt passes through as it is", "[wire]") {
    class InterruptedLink final : public Link {
    public:
        Outcome<Moved> exchange(std::span<const std::byte>, std::span<std::byte>, Instant) override {
            return Error{ErrorKind::interrupted, "line", "interrupted by INT", ""};
        }
        std::string name() const override { return "line"; }
        long baud() const override { return 0; }
    };
    FakeClock clock;
    InterruptedLink link;
    const std::unique_ptr<Wire> wire = make_framed_wire(link, clock, WireLimits{});
    const Outcome<Greeting> greeting = wire->greet();
    REQUIRE_FALSE(greeting);
    CHECK(greeting.error().kind == ErrorKind::interrupted);
}
