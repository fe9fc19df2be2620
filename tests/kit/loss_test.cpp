// Whatever the line loses, each sample passes the filter exactly once.
#include <catch2/catch.hpp>
#include <deque>
#include <random>

#include "tests/kit/bench.hpp"

using namespace kit_bench;

namespace {

Bytes expect(unsigned seq) { return u8(0x92) + u16(seq); }

Bytes counters() { return ask_one(u8(0x03) + u32(0xC0FFEEu), 0x83); }
std::uint32_t frames_bad() { return get32(counters(), 5); }
std::uint32_t bytes_lost() { return get32(counters(), 9); }
std::uint32_t gaps() { return get32(counters(), 13); }
std::uint32_t resent() { return get32(counters(), 17); }
std::uint32_t blocks() { return get32(counters(), 21); }

}  // namespace

TEST_CASE("loss: a repeated block is answered with the kept reply, not computed again", "[kit]") {
    power_up();
    log().ticks_a_call = 10;
    const unsigned credit = start(double_filter, HALFLSB_BLOCK_SAMPLES).credit;
    std::vector<Bytes> sent, answered;
    for (unsigned seq = 0; seq < credit; ++seq) {
        sent.push_back(samples_content(seq, {static_cast<std::int16_t>(seq + 1)}));
        log().ticks_a_call += seq;
        answered.push_back(ask_one(sent.back(), 0x90));
    }
    const std::uint64_t calls = log().calls;
    for (unsigned seq = 0; seq < credit; ++seq) CHECK(ask(sent[seq]) == std::vector<Bytes>{answered[seq]});
    CHECK(ask(sent[0]) == std::vector<Bytes>{answered[0]});
    CHECK(log().calls == calls);
    CHECK(resent() == credit + 1);
    CHECK(blocks() == credit);
    // The next one takes the oldest one's place: that is no longer known.
    ask_one(samples_content(credit, {1}), 0x90);
    CHECK(ask(sent[0]) == std::vector<Bytes>{expect(credit + 1)});
    if (credit > 1) CHECK(ask(sent[1]) == std::vector<Bytes>{answered[1]});
}

TEST_CASE("loss: a broken frame changes no kept reply and no state", "[kit]") {
    power_up();
    const unsigned credit = start(double_filter, HALFLSB_BLOCK_SAMPLES).credit;
    std::vector<Bytes> answered;
    for (unsigned seq = 0; seq < credit; ++seq) {
        answered.push_back(ask_one(samples_content(seq, {static_cast<std::int16_t>(100 + seq)}), 0x90));
    }
    const Bytes next = frame_of(samples_content(credit, std::vector<std::int16_t>(HALFLSB_BLOCK_SAMPLES, 0x1234)));
    for (std::size_t i = 0; i + 1 < next.size(); ++i) {
        Bytes broken = next;
        broken[i] = static_cast<std::uint8_t>(broken[i] ^ 0x10);
        put(broken);
        CHECK(take().empty());
    }
    CHECK(log().calls == credit);
    CHECK(frames_bad() >= next.size() - 1);  // a flip that makes a delimiter makes two broken frames
    for (unsigned seq = 0; seq < credit; ++seq) {
        CHECK(ask(samples_content(seq, {static_cast<std::int16_t>(100 + seq)})) == std::vector<Bytes>{answered[seq]});
    }
    put(next);
    CHECK(take().size() == 1);
}

TEST_CASE("loss: a frame cut short or with a byte too many is dropped and counted", "[kit]") {
    power_up();
    const Bytes good = frame_of(u8(0x03) + u32(0x11223344));
    for (std::size_t length = 1; length + 1 < good.size(); ++length) {
        put(Bytes(good.begin(), good.begin() + static_cast<std::ptrdiff_t>(length)) + u8(0));
        CHECK(take().empty());
    }
    CHECK(frames_bad() == good.size() - 2);
    put(Bytes(good.begin(), good.end() - 1) + u8(5) + u8(0));
    CHECK(take().empty());
    CHECK(frames_bad() == good.size() - 1);
}

TEST_CASE("loss: frames ahead are answered once by EXPECT, and again when the run begins anew", "[kit]") {
    power_up();
    start(double_filter, 1);
    ask_one(samples_content(0, {1}), 0x90);
    CHECK(ask(samples_content(2, {3})) == std::vector<Bytes>{expect(1)});
    CHECK(ask(samples_content(3, {4})).empty());
    CHECK(ask(samples_content(5, {6})).empty());
    CHECK(log().samples[double_filter] == 1);
    CHECK(gaps() == 3);
    CHECK(ask(samples_content(2, {3})) == std::vector<Bytes>{expect(1)});  // sent again, and 1 was lost again
    CHECK(ask(samples_content(3, {4})).empty());
    CHECK(words_of(ask_one(samples_content(1, {2}), 0x90)) == std::vector<std::int16_t>{4});
    CHECK(words_of(ask_one(samples_content(2, {3}), 0x90)) == std::vector<std::int16_t>{6});
    CHECK(ask(samples_content(4, {5})) == std::vector<Bytes>{expect(3)});
}

TEST_CASE("loss: a command ahead is not carried out", "[kit]") {
    power_up();
    start(double_filter, 1);
    CHECK(ask(u8(0x11) + u16(1) + u64(0)) == std::vector<Bytes>{expect(0)});
    CHECK(log().resets[double_filter] == 1);
}

TEST_CASE("loss: a full ring counts what it loses and recovers", "[kit]") {
    power_up();
    start(double_filter, 1);
    // Nothing is polled meanwhile: more than the ring holds.
    const std::size_t ring = 300 + HALFLSB_CREDIT_BLOCKS * (2u * HALFLSB_BLOCK_SAMPLES * HALFLSB_WORD_BYTES + 100u);
    std::size_t sent = 0;
    while (sent < ring) {
        for (std::uint8_t byte : frame_of(u8(0x04) + u32(1))) {
            halflsb_receive_byte(byte);
            ++sent;
        }
    }
    put({});     // only works off what is there
    put(u8(0));  // ends the frame that was cut
    take();
    CHECK(bytes_lost() > 0);
    halflsb_receive_overrun();
    const std::uint32_t lost = bytes_lost();
    halflsb_receive_overrun();
    CHECK(bytes_lost() == lost + 1);
    CHECK(words_of(ask_one(samples_content(0, {4}), 0x90)) == std::vector<std::int16_t>{8});
}

TEST_CASE("loss: a frame longer than the ring is one bad frame, and the next is taken", "[kit]") {
    power_up();
    const std::size_t ring = 300 + HALFLSB_CREDIT_BLOCKS * (2u * HALFLSB_BLOCK_SAMPLES * HALFLSB_WORD_BYTES + 100u);
    for (std::size_t poll_every : {std::size_t{1}, std::size_t{7}, std::size_t{50}}) {
        const std::uint32_t before = frames_bad();
        put(Bytes(3 * ring, 0x55) + u8(0), poll_every);
        CHECK(take().empty());
        CHECK(frames_bad() == before + 1);
    }
}

// A host of the page's rules (window, go back to the oldest unanswered, answers in order only) over a line that loses,
// flips and doubles bytes in both directions.
TEST_CASE("loss: over a bad line each sample comes back once and in order", "[kit]") {
    for (std::uint32_t seed = 1; seed <= 20; ++seed) {
        INFO("seed " << seed);
        power_up();
        std::mt19937 generator(seed);
        const auto chance = [&](unsigned one_in) { return generator() % one_in == 0; };
        const auto spoilt = [&](const Bytes& bytes) {
            Bytes out;
            for (std::uint8_t byte : bytes) {
                if (chance(400)) continue;
                out.push_back(chance(400) ? static_cast<std::uint8_t>(byte ^ (1u << (generator() % 8))) : byte);
                if (chance(1000)) out.push_back(byte);
            }
            return out;
        };
        const unsigned block = std::min(HALFLSB_BLOCK_SAMPLES, 24);
        const unsigned credit = start(double_filter, block).credit;
        std::vector<std::int16_t> stimulus(2000), response;
        for (auto& sample : stimulus) sample = static_cast<std::int16_t>(generator() % 65536 - 32768);
        std::deque<Bytes> in_flight;
        std::size_t next_sample = 0;
        unsigned next_seq = 0, oldest = 0, rounds = 0;
        Bytes pending;
        while ((next_sample < stimulus.size() || !in_flight.empty()) && ++rounds < 20000) {
            while (in_flight.size() < credit && next_sample < stimulus.size()) {
                const std::size_t count = std::min<std::size_t>(block, stimulus.size() - next_sample);
                const auto first = stimulus.begin() + static_cast<std::ptrdiff_t>(next_sample);
                in_flight.push_back(frame_of(
                    samples_content(next_seq++ & 0xFFFFu,
                                    std::vector<std::int16_t>(first, first + static_cast<std::ptrdiff_t>(count)))));
                next_sample += count;
            }
            put(u8(0), 0);  // ends what was cut
            for (const Bytes& frame : in_flight) put(spoilt(frame), 5);
            pending = std::move(pending) + spoilt(take_bytes());
            Bytes encoded;
            for (std::uint8_t byte : std::exchange(pending, {})) {
                if (byte != 0) {
                    encoded.push_back(byte);
                    continue;
                }
                const auto content = content_of_cobs(std::exchange(encoded, {}));
                if (!content || content->size() < 7) continue;
                const Bytes body(content->begin(), content->end() - 4);
                if (get32(*content, body.size()) != crc_of(body)) continue;
                REQUIRE((body[0] == 0x90 || body[0] == 0x92));
                if (body[0] != 0x90 || in_flight.empty() || get16(body, 1) != (oldest & 0xFFFFu)) continue;
                for (std::int16_t word : words_of(body)) response.push_back(word);
                in_flight.pop_front();
                ++oldest;
            }
        }
        for (auto& sample : stimulus) sample = static_cast<std::int16_t>(2 * sample);
        CHECK(response == stimulus);
        CHECK(log().samples[double_filter] == stimulus.size());
    }
}
