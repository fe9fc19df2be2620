// Faults on the line, systematically: each kind, in each direction, once or from then on, at every transfer
// until it no longer fires. Allowed: the right samples, or an Error with a reason. Never a wrong sample, a hang.
#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

constexpr std::int64_t count = 1000;
const std::vector<std::int64_t> resets{500};

/// Longer than the patience of greeting, start, counters and stream together: beyond it is a hang.
const Duration longest = seconds(120.0);

struct Outcomes {
    int right = 0, errors = 0;
};

/// True while the fault still fires.
bool run_with_fault(bool to_board, FakeLine::Fault fault, long baud, Outcomes& outcomes) {
    Bench bench;
    bench.limits.block_samples = 64;
    bench.link.set_baud(baud);
    FakeLine& line = to_board ? bench.link.to_board : bench.link.to_host;
    line.set_fault(fault);
    INFO(name_of(fault.kind) << (fault.from_now_on ? " from transfer " : " at transfer ") << fault.nth
                             << (to_board ? " to the board" : " to the host") << ", baud " << baud);
    std::optional<Error> error;
    Streamed streamed;
    if (const Outcome<void> opened = bench.open(1); !opened) {
        error = opened.error();
    } else {
        streamed = stream(bench.session(), count, bench.clock, resets);
        error = streamed.error;
    }
    const std::vector<Code> right = summed(count, resets);
    // Also before an error no sample may be wrong.
    REQUIRE(streamed.samples.size() <= right.size());
    REQUIRE(std::equal(streamed.samples.begin(), streamed.samples.end(), right.begin()));
    REQUIRE(streamed.is_in_order);
    REQUIRE(bench.clock.elapsed() < longest);
    if (error) {
        INFO(to_text(*error));
        REQUIRE(error->kind == ErrorKind::bench);
        REQUIRE(error->place == "fake line");
        REQUIRE_FALSE(error->problem.empty());
        REQUIRE_FALSE(error->remedy.empty());
        // One fault alone must be survived.
        REQUIRE(fault.from_now_on);
        ++outcomes.errors;
    } else {
        REQUIRE(streamed.samples == right);
        REQUIRE(bench.board.processed_samples == count);
        ++outcomes.right;
    }
    return line.fault_has_fired();
}

}  // namespace

TEST_CASE("line faults: the right samples or a reason, whatever the line does", "[wire][slow]") {
    for (const long baud : {0L, 921600L}) {
        for (const LineFault kind : {LineFault::drop, LineFault::lose, LineFault::flip, LineFault::repeat,
                                     LineFault::split, LineFault::merge, LineFault::stall, LineFault::garbage}) {
            for (const bool to_board : {true, false}) {
                for (const bool from_now_on : {false, true}) {
                    Outcomes outcomes;
                    int nth = 1;
                    while (run_with_fault(to_board, {kind, from_now_on, nth}, baud, outcomes)) ++nth;
                    INFO(name_of(kind) << ": " << outcomes.right << " right, " << outcomes.errors << " errors");
                    CHECK(nth > 10);
                    // The last transfer's answer may be all that is hit, but most of them must have an effect.
                    const bool is_harmless = kind == LineFault::split || kind == LineFault::garbage ||
                                             kind == LineFault::merge || !from_now_on;
                    if (!is_harmless) CHECK(outcomes.errors > 0);
                }
            }
        }
    }
}

TEST_CASE("line faults: rare random ones over a long stream", "[wire][slow]") {
    // Every 20th transfer either way is hit by something; the stream must come through, slower.
    class Weather final : public Peer {
    public:
        explicit Weather(Peer& board) : board_(board) {}
        Bytes receive(std::span<const std::byte> bytes) override {
            return disturbed(board_.receive(disturbed(Bytes(bytes.begin(), bytes.end()))));
        }
        int hits = 0;

    private:
        Bytes disturbed(Bytes bytes) {
            if (bytes.empty() || random_() % 20 != 0) return bytes;
            ++hits;
            const auto place = bytes.begin() + static_cast<std::ptrdiff_t>(random_() % bytes.size());
            switch (random_() % 4) {
                case 0:
                    bytes.erase(place);
                    break;
                case 1:
                    *place ^= std::byte{1} << (random_() % 8);
                    break;
                case 2:
                    bytes.insert(place, static_cast<std::byte>(random_() & 0xFF));
                    break;
                default:
                    bytes.clear();
            }
            return bytes;
        }
        Peer& board_;
        std::minstd_rand random_{7};
    };
    FakeClock clock;
    ModelBoard board;
    Weather weather(board);
    FakeLink link(clock, weather);
    link.remembers = false;
    WireLimits limits;
    limits.block_samples = 32;
    const std::unique_ptr<Wire> wire = make_framed_wire(link, clock, limits, 5);
    REQUIRE(wire->greet());
    REQUIRE(wire->start(1));
    const Streamed streamed = stream(*wire, 200'000, clock);
    if (streamed.error) INFO(to_text(*streamed.error));
    REQUIRE_FALSE(streamed.error);
    CHECK(streamed.samples == summed(200'000));
    CHECK(weather.hits > 100);
    CHECK(wire->figures().resends > 50);
    CHECK(wire->figures().frames_bad > 10);
    CHECK(board.resent > 0);
}

TEST_CASE("line faults: the link goes at any exchange", "[wire]") {
    for (int at = 1;; ++at) {
        Bench bench;
        bench.limits.block_samples = 64;
        bench.link.gone_at_exchange = at;
        std::optional<Error> error;
        Streamed streamed;
        if (const Outcome<void> opened = bench.open(1); !opened)
            error = opened.error();
        else
            streamed = stream(bench.session(), 640, bench.clock), error = streamed.error;
        if (!error) {
            CHECK(at > 10);
            break;
        }
        CAPTURE(at);
        CHECK(error->problem == "the port is gone");
        const std::vector<Code> right = summed(640);
        CHECK(std::equal(streamed.samples.begin(), streamed.samples.end(), right.begin()));
        // And it stays so.
        const Outcome<Received> again = bench.session().advance(bench.clock.now());
        REQUIRE_FALSE(again);
        CHECK(again.error().problem == "the port is gone");
        CHECK(bench.session().room_samples() == 0);
    }
}

TEST_CASE("line faults: a loss in the middle is noticed at once, and frames go out again once", "[wire]") {
    for (const bool to_board : {true, false}) {
        CAPTURE(to_board);
        Bench bench;
        bench.limits.block_samples = 64;
        bench.board.credit_blocks = 16;
        REQUIRE(bench.open(1));
        FakeLine& line = to_board ? bench.link.to_board : bench.link.to_host;
        line.set_fault({LineFault::flip, false, line.transfers() + 1});
        const Duration before = bench.clock.elapsed();
        const Streamed streamed = stream(bench.session(), 10'000, bench.clock);
        REQUIRE_FALSE(streamed.error);
        CHECK(streamed.samples == summed(10'000));
        // EXPECT, or an answer that is skipped: no waiting for the resend time.
        CHECK(bench.clock.elapsed() - before < bench.limits.resend / 2);
        const WireFigures figures = bench.session().figures();
        CHECK(figures.resends == 1);
        CHECK(figures.frames_bad == (to_board ? 0 : 1));
        // At most a full window more than without the loss.
        CHECK(figures.bytes_sent <= bench.session().bytes_to_board(10'000 + 16 * 64));
    }
}

TEST_CASE("line faults: a loss at the end is noticed by time", "[wire]") {
    for (const bool to_board : {true, false}) {
        CAPTURE(to_board);
        Bench bench;
        bench.link.set_baud(115200);
        bench.board.credit_blocks = 64;
        REQUIRE(bench.open(1));
        FakeLine& line = to_board ? bench.link.to_board : bench.link.to_host;
        line.set_fault({LineFault::lose, false, line.transfers() + 1});
        bench.session().send(std::vector<Code>{1, 2, 3});
        const Instant begin = bench.clock.now();
        const Outcome<Received> received = bench.session().advance(begin + seconds(10.0));
        REQUIRE(received);
        CHECK(received->samples == std::vector<Code>{1, 3, 6});
        CHECK(bench.clock.now() - begin >= bench.limits.resend);
        CHECK(bench.clock.now() - begin < bench.limits.answer);
        CHECK(bench.session().figures().resends == 1);
        CHECK(bench.board.processed_samples == 3);
    }
}
